/** One ink for every figure; series are told apart by pattern, marker and label first. Sizes in points of print. */
export const INK = '#1e1c19';
/** The same ink, thinned. */
export const PALE = '#6b665e';
export const FAINT = '#b9b3a8';
export const SECOND = '#2f5d62';

export const LABEL_SIZE = 7.5;
export const SMALL_SIZE = 7;

/** Width of the text column and of the full measure. */
export const COLUMN = 334;
export const FULL = 440;

export interface Stroke {
  readonly color: string;
  readonly width: number;
  readonly type: 'solid' | readonly number[];
}

/** The chosen structure is drawn solid and heavy; rivals by pattern. */
export const CHOSEN: Stroke = { color: INK, width: 1.7, type: 'solid' };

const rivals: readonly Stroke[] = [
  { color: INK, width: 0.9, type: [6, 2.5] },
  { color: INK, width: 1.1, type: [1.2, 2.4] },
  { color: INK, width: 0.9, type: [8, 2, 1.2, 2] },
  { color: SECOND, width: 1, type: [3, 2] },
  { color: SECOND, width: 1.1, type: [10, 3, 3, 3] },
  { color: SECOND, width: 1, type: 'solid' },
];

/** The stroke of the rival at a place; after six they come round again, told apart by their labels. */
export function rivalStroke(place: number): Stroke {
  return rivals[place % rivals.length] as Stroke;
}
