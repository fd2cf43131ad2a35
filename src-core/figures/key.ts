import type { Stroke } from './ink';
import type { Overlay, Panel } from './panel';
import { spread, yAt } from './panel';

/** A line of a panel that is named at its right end. */
export interface Named {
  readonly name: string;
  /** Its last value, in the panel's own units. */
  readonly end: number;
  readonly stroke: Stroke;
  /** Of marks in place of a line; null for a line. */
  readonly symbol?: 'rect' | 'diamond' | 'triangle' | null;
}

/** Names lines at the right of their panel, apart from each other; a stretch in the line's own pattern leads to each name. */
export function nameLines(overlay: Overlay, panel: Panel, lines: readonly Named[]): void {
  const edge = panel.left + panel.width;
  const ends = lines.map(({ end }) => Math.min(Math.max(yAt(panel, end), panel.top), panel.top + panel.height));
  const places = spread(ends, { gap: 10, low: panel.top + 2, high: panel.top + panel.height - 4 });
  for (const [i, { name, stroke, symbol }] of lines.entries()) {
    const y = places[i] as number;
    if (symbol) overlay.mark(edge + 20, y, { size: [4, 4], open: true, symbol });
    else
      overlay.line(
        [
          [edge, ends[i] as number],
          [edge + 9, y],
          [edge + 25, y],
        ],
        { ...stroke },
      );
    overlay.text(name, { x: edge + 28, y, side: 'right' });
  }
}

/** A name cut in its middle to what a figure has room for, since names often differ at their ends; the tables have it whole. */
export function short(name: string, most = 26): string {
  const letters = [...name];
  if (letters.length <= most) return name;
  const head = Math.ceil((most - 1) / 2);
  return `${letters.slice(0, head).join('')}…${letters.slice(letters.length - (most - 1 - head)).join('')}`;
}
