import type { Figure, FigureOption } from '@core/protocol/figure';

/** The two inks of the page as it stands, and its faces. */
export interface Dress {
  readonly paper: string;
  readonly ink: string;
  readonly face: string;
}

/** Reads the page's own colours and faces. */
export function dressOf(element: Element): Dress {
  const style = getComputedStyle(element);
  const of = (name: string) => style.getPropertyValue(name).trim();
  return { paper: of('--paper'), ink: of('--ink'), face: of('--note-face') };
}

const colourKeys = new Set(['color', 'fill', 'borderColor']);
const labelKeys = new Set(['label', 'endLabel']);
/** Sizes in points of print, which grow with the figure. */
const sizeKeys = new Set([
  'left',
  'right',
  'top',
  'bottom',
  'nameGap',
  'length',
  'fontSize',
  'width',
  'borderWidth',
  'symbolSize',
  'barWidth',
]);

/**
 * A figure's option for the page: sizes times scale, colours as steps between the page's ink and paper, names and labels in the page's face.
 */
export function dressed(
  option: FigureOption,
  { dress, scale }: { readonly dress: Dress; readonly scale: number },
): object {
  const walk = (value: unknown, key: string): unknown => {
    if (colourKeys.has(key) && typeof value === 'string') return recoloured(value, dress);
    if (sizeKeys.has(key)) {
      if (typeof value === 'number') return value * scale;
      if (Array.isArray(value)) return value.map((one) => (typeof one === 'number' ? one * scale : one));
    }
    if (key === 'type' && Array.isArray(value)) return value.map((one) => Number(one) * scale); // dashes
    // Data are numbers of the result, never sizes; only what dresses a single point is walked.
    if (key === 'data' && Array.isArray(value))
      return value.map((one) =>
        one !== null && typeof one === 'object' && !Array.isArray(one) ? walkPoint(one) : one,
      );
    if (Array.isArray(value)) return value.map((one) => walk(one, ''));
    if (value === null || typeof value !== 'object') return value;
    // A label stands this far from its point, and is seen even where the point is not.
    if (labelKeys.has(key)) return { distance: 5 * scale, opacity: 1, ...entriesOf(value) };
    return entriesOf(value);
  };
  const entriesOf = (value: object): object =>
    Object.fromEntries(Object.entries(value).map(([name, one]) => [name, walk(one, name)]));
  const walkPoint = (point: object): object =>
    Object.fromEntries(Object.entries(point).map(([name, one]) => [name, name === 'value' ? one : walk(one, name)]));
  const text = { color: dress.ink, fontFamily: dress.face };
  const worn = walk(option, '') as Record<string, unknown>;
  return { ...worn, ...axesIn(worn, dress, scale), textStyle: text, backgroundColor: 'transparent' };
}

/** Axes that say nothing of their ink take the page's. */
function axesIn(worn: Record<string, unknown>, dress: Dress, scale: number): object {
  const inked = (axis: Record<string, Record<string, unknown> | undefined>) => ({
    ...axis,
    nameTextStyle: { color: dress.ink, fontSize: 8 * scale, fontFamily: dress.face, ...axis['nameTextStyle'] },
    axisLabel: { color: dress.ink, fontSize: 8 * scale, fontFamily: dress.face, ...axis['axisLabel'] },
    axisLine: { ...axis['axisLine'], lineStyle: { color: dress.ink, ...(axis['axisLine']?.['lineStyle'] as object) } },
    axisTick: { lineStyle: { color: dress.ink }, ...axis['axisTick'] },
  });
  const each = (axes: unknown) => (Array.isArray(axes) ? axes.map(inked) : inked(axes as never));
  return { xAxis: each(worn['xAxis']), yAxis: each(worn['yAxis']) };
}

/** A colour of print as the same step from ink to paper: series are told apart by pattern and label. */
export function recoloured(colour: string, { ink, paper }: Dress): string {
  const parts = rgbOf(colour);
  const [dark, light] = [rgbOf(ink), rgbOf(paper)];
  if (parts === null) return colour;
  if (dark === null || light === null) return colour;
  const share = (Math.max(...parts) + Math.min(...parts)) / 2 / 255;
  const mixed = dark.map((value, i) => Math.round(value + share * ((light[i] as number) - value)));
  return `rgb(${mixed.join(', ')})`;
}

export function rgbOf(colour: string): readonly [number, number, number] | null {
  const long = /^#([0-9a-f]{3}|[0-9a-f]{6})$/i.exec(colour)?.[1];
  if (long === undefined) return null;
  const pairs = long.length === 3 ? [...long].map((one) => one + one) : (long.match(/../g) ?? []);
  return pairs.map((pair) => Number.parseInt(pair, 16)) as unknown as [number, number, number];
}

/** A point of a figure that stands for a cell. */
export interface NamedPoint {
  readonly name: string;
  readonly series: number;
  readonly value: readonly (number | string | null)[];
  readonly xAxis: number;
  readonly yAxis: number;
}

/** The points that carry a cell's label, in the order in which they are drawn. */
export function namedPoints({ option }: Pick<Figure, 'option'>): readonly NamedPoint[] {
  return option.series.flatMap((one, series) =>
    one.data.flatMap((point) =>
      'value' in point && point.name !== undefined
        ? [{ name: point.name, series, value: point.value, xAxis: one.xAxisIndex ?? 0, yAxis: one.yAxisIndex ?? 0 }]
        : [],
    ),
  );
}

/** How many data a figure draws. */
export function sizeOf({ option }: Pick<Figure, 'option'>): number {
  return option.series.reduce((sum, { data }) => sum + data.length, 0);
}
