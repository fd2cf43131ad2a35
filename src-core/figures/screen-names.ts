import type { Figure, FigureSeries } from '../protocol/figure';

/**
 * The same figure with the label of its cell on every point that stands for one, so that a cell can be marked in it.
 *
 * A point is a cell's where a row of the figure's numbers, named by that cell, holds both of its coordinates; points of cells that agree in
 * both take the first one's name.
 */
export function withCellNames(figure: Figure, labels: ReadonlySet<string>): Figure {
  const names = namesByPlace(figure, labels);
  if (names.size === 0) return figure;
  const series = figure.option.series.map((one) => (one.type === 'scatter' ? named(one, names) : one));
  return { ...figure, option: { ...figure.option, series } };
}

function named(series: FigureSeries, names: ReadonlyMap<string, string>): FigureSeries {
  if (series.silent === true) return series;
  const data = series.data.map((point) => {
    if ('value' in point) return point;
    const name = names.get(placeOf(point[0] ?? null, point[1] ?? null));
    return name === undefined ? point : { value: point, name };
  });
  return { ...series, data };
}

function namesByPlace({ data }: Figure, labels: ReadonlySet<string>): ReadonlyMap<string, string> {
  const names = new Map<string, string>();
  for (const [first, ...rest] of data.rows) {
    const label = first?.text ?? '';
    if (!labels.has(label)) continue;
    const numbers = rest.map(({ value }) => value).filter((value): value is number => typeof value === 'number');
    for (const x of numbers)
      for (const y of numbers) {
        const place = placeOf(x, y);
        if (!names.has(place)) names.set(place, label);
      }
  }
  return names;
}

function placeOf(x: number | string | null, y: number | string | null): string {
  return `${x}|${y}`;
}
