import type { Figure } from '../protocol/figure';
import type { Result } from '../protocol/result';
import { heaviestWithHalf } from '../words/beams';
import { figureHeads, figureWords } from '../words/figures';
import { structureName } from '../words/structures';
import { dataTable } from './data-table';
import { CHOSEN, COLUMN, FAINT, rivalStroke, type Stroke } from './ink';
import { nameLines, short } from './key';
import { openSheet, type Panel, referenceLine } from './panel';

const words = figureWords.concentration;
const HEIGHT = 166;
/** A curve of more cells is drawn through so many of its points. */
const POINTS = 400;

interface Curve {
  readonly name: string;
  readonly shares: readonly number[];
  readonly stroke: Stroke;
}

/** The cumulated weight, cells added from the heaviest, under the stated structure and those beside it; null for fewer than two cells. */
export function concentrationFigure(result: Result): Figure | null {
  const cells = result.cells.length;
  if (cells < 2) return null;
  const curves = curvesOf(result);
  const own = curves[0] as Curve;
  const half = heaviestWithHalf(own.shares);
  const panel: Panel = {
    left: 40,
    top: 22,
    width: COLUMN - 40 - 118,
    height: HEIGHT - 22 - 34,
    x: { min: 0, max: cells, log: false },
    y: { min: 0, max: 1, log: false },
    xName: words.xName,
    yName: words.yName,
  };
  const size = { width: COLUMN, height: HEIGHT };
  const { overlay, series, ...axes } = openSheet(size, [panel]);
  referenceLine(overlay, panel, { x: half, type: [1.2, 2] });
  referenceLine(overlay, panel, { y: 0.5, type: [1.2, 2] });
  const equal = { color: FAINT, width: 0.8, type: 'solid' } as const;
  series.push({
    type: 'line',
    xAxisIndex: 0,
    yAxisIndex: 0,
    data: [
      [0, 0],
      [cells, 1],
    ],
    symbol: 'none',
    lineStyle: equal,
  });
  for (const { shares, stroke } of curves)
    series.push({
      type: 'line',
      xAxisIndex: 0,
      yAxisIndex: 0,
      data: cumulated(shares),
      symbol: 'none',
      lineStyle: { ...stroke },
      z: 3,
    });
  nameLines(overlay, panel, [
    ...curves.map(({ name, stroke }, i) => ({ name: short(name, 22), end: 0.94 - 0.09 * i, stroke })),
    { name: words.equal, end: 0.94 - 0.09 * curves.length, stroke: equal },
  ]);
  return {
    id: 'concentration',
    caption: words.caption,
    alt: words.alt(half, cells, own.shares[0] as number),
    ...size,
    option: { animation: false, ...axes, series },
    data: dataTable({
      caption: words.yName,
      head: [figureHeads.rank, ...curves.map(({ name }) => name)],
      rows: ranks(cells).map((rank) => [`${rank}`, ...curves.map(({ shares }) => sumOf(shares, rank))]),
    }),
  };
}

/** Shares in falling order; the weights of rivals that are equal for all cells are the straight line already. */
function curvesOf({ plan, cells, beside }: Result): Curve[] {
  const falling = (shares: readonly number[]): number[] => [...shares].sort((a, b) => b - a);
  const rivals = beside.map(({ variance, variances }, i) => {
    const weights = variances.map((v) => 1 / v);
    const total = weights.reduce((sum, w) => sum + w, 0);
    return { name: structureName(variance), shares: falling(weights.map((w) => w / total)), stroke: rivalStroke(i) };
  });
  const own = {
    name: structureName(plan.variance),
    shares: falling(cells.map(({ weightShare }) => weightShare)),
    stroke: CHOSEN,
  };
  return [own, ...rivals.filter(({ shares }) => (shares[0] as number) > (shares.at(-1) as number) * (1 + 1e-9))];
}

function ranks(cells: number): number[] {
  const step = Math.max(1, Math.ceil(cells / POINTS));
  const all = Array.from({ length: Math.ceil(cells / step) }, (_, i) => (i + 1) * step).filter((rank) => rank < cells);
  return [...all, cells];
}

function sumOf(shares: readonly number[], rank: number): number {
  let sum = 0;
  for (let i = 0; i < rank; i++) sum += shares[i] as number;
  return Math.min(1, sum);
}

function cumulated(shares: readonly number[]): [number, number][] {
  return [[0, 0], ...ranks(shares.length).map((rank): [number, number] => [rank, sumOf(shares, rank)])];
}
