import type { Figure, FigureSeries } from '../protocol/figure';
import type { Result } from '../protocol/result';
import { figureHeads, figureWords } from '../words/figures';
import { dataTable } from './data-table';
import { COLUMN, INK, SMALL_SIZE } from './ink';
import { type Named, nameLines, short } from './key';
import { type Overlay, openSheet, type Panel, xAt, yAt } from './panel';
import { planeOf } from './plane';
import { rangeAround } from './ticks';
import { type Curve, curveSeries, curvesOf, followsOnly, markOf } from './variance-curves';

const words = figureWords.residuals;
const HEIGHT = 226;
const PARTS = 6;
/** With fewer cells their means say nothing. */
export const FEWEST_FOR_MEANS = 3 * PARTS;
/** Squared residuals this far below the smallest stated variance say no more than that they are small. */
const LOWEST = 1e-3;

interface Points {
  readonly by: 'size' | 'variance';
  readonly x: readonly number[];
  readonly squared: readonly number[];
}

/**
 * Squared residuals against size with the variance that every structure gives; against the stated variance where that does not follow size.
 *
 * Null where no residual is left to draw.
 */
export function squaredResiduals(result: Result): Figure | null {
  const points = pointsOf(result);
  const { by, x, squared } = points;
  if (!squared.some((value) => value > 0)) return null;
  const curves = curvesOf(result, x);
  const stated = curves.flatMap(({ line }) => line.map(([, v]) => v));
  const floor = LOWEST * Math.min(...stated);
  const y = rangeAround([...squared.filter((value) => value >= floor), ...stated], { log: true });
  const panel: Panel = {
    left: 40,
    top: 22,
    width: COLUMN - 40 - 118,
    height: HEIGHT - 22 - 34,
    x: rangeAround(x, { log: true, room: 0.02 }),
    y,
    xName: by === 'size' ? words.size(result) : words.variance,
    yName: words.yName(result),
  };
  const size = { width: COLUMN, height: HEIGHT };
  const { overlay, series, ...axes } = openSheet(size, [panel]);
  const plane = planeOf(panel, series.length);
  const low = squared.filter((value) => value < y.min).length;
  series.push(...pointSeries(points, y.min), ...curves.map(curveSeries));
  drawMeans(overlay, panel, meansOf(result, points));
  nameLines(
    overlay,
    panel,
    curves.map(({ name, line, stroke, marks }, place): Named => {
      const end = line.at(-1)?.[1] ?? y.min;
      return { name: short(name, 22), end, stroke, symbol: marks ? markOf(place) : null };
    }),
  );
  return {
    id: 'squared-residuals',
    caption: words.caption(by, low),
    alt: words.alt(
      x.length,
      curves.map(({ name }) => name),
    ),
    ...size,
    option: { animation: false, ...axes, series },
    plane,
    data: dataOf(result, points, curves),
  };
}

/** Squares at the means, and what they are at the right of the axis. */
function drawMeans(overlay: Overlay, panel: Panel, means: readonly (readonly [number, number])[]): void {
  if (means.length === 0) return;
  for (const [at, mean] of means) {
    const inside = Math.min(Math.max(mean, panel.y.min), panel.y.max);
    overlay.mark(xAt(panel, at), yAt(panel, inside), { size: [5, 5] });
  }
  const edge = panel.left + panel.width;
  const foot = panel.top + panel.height + 11;
  overlay.mark(edge + 20, foot, { size: [5, 5] });
  overlay.text(words.mean, { x: edge + 28, y: foot, side: 'right', size: SMALL_SIZE });
}

function pointsOf({ cells }: Result): Points {
  const sizes = cells.map((cell) => cell.effectiveSize ?? cell.size);
  const squared = cells.map(({ residual }) => residual * residual);
  const variances = cells.map(({ variance }) => variance);
  const known = sizes.filter((size): size is number => size !== null && size > 0);
  return known.length === cells.length && followsOnly(known, variances)
    ? { by: 'size', x: known, squared }
    : { by: 'variance', x: variances, squared };
}

function pointSeries({ x, squared }: Points, floor: number): FigureSeries[] {
  const points = x.map((at, i): [number, number] => [at, squared[i] as number]);
  const marks = { type: 'scatter', xAxisIndex: 0, yAxisIndex: 0 } as const;
  const size = x.length > 400 ? 2 : x.length > 120 ? 2.8 : 3.4;
  const style = { color: INK, opacity: x.length > 400 ? 0.35 : 0.5 };
  const inside = points.filter(([, value]) => value >= floor);
  const below = points.filter(([, value]) => value < floor).map(([at]): [number, number] => [at, floor]);
  return [
    { ...marks, data: inside, symbol: 'circle', symbolSize: size, itemStyle: style },
    { ...marks, data: below, symbol: 'triangle', symbolSize: size, itemStyle: style },
  ];
}

/** Mean of r^2 / (1 - h) over each sixth of the cells in order of x, at the middle cell's x. */
function meansOf({ cells }: Result, { x, squared }: Points): [number, number][] {
  const order = x.map((_, i) => i).sort((a, b) => (x[a] as number) - (x[b] as number) || a - b);
  if (order.length < FEWEST_FOR_MEANS) return [];
  return Array.from({ length: PARTS }, (_, part) => {
    const from = Math.floor((part * order.length) / PARTS);
    const to = Math.floor(((part + 1) * order.length) / PARTS);
    const own = order.slice(from, to).filter((i) => 1 - (cells[i]?.leverage ?? 1) > 1e-6);
    const mean =
      own.reduce((sum, i) => sum + (squared[i] as number) / (1 - (cells[i]?.leverage as number)), 0) / own.length;
    return [x[order[Math.floor((from + to) / 2)] as number] as number, mean] as [number, number];
  }).filter(([, mean]) => mean > 0);
}

function dataOf({ cells }: Result, { by, x, squared }: Points, curves: readonly Curve[]) {
  const value = (line: Curve['line'], at: number): number | null => line.find(([own]) => own === at)?.[1] ?? null;
  const few = cells.length <= 200;
  return dataTable({
    caption: words.caption(by, 0),
    head: [
      figureHeads.cell,
      by === 'size' ? figureHeads.size : figureHeads.stated,
      figureHeads.squared,
      ...(few ? curves.map(({ name }) => name) : []),
    ],
    rows: cells.map(({ label }, i) => [
      label,
      x[i] as number,
      squared[i] as number,
      ...(few ? curves.map(({ line }) => value(line, x[i] as number)) : []),
    ]),
  });
}
