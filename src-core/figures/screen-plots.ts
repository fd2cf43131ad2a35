import { normalQuantile } from '../numbers/normal';
import type { Figure } from '../protocol/figure';
import type { Result } from '../protocol/result';
import { figureWords } from '../words/figures';
import { plotWords } from '../words/screen-plots';
import { structureName } from '../words/structures';
import { dataTable } from './data-table';
import { CHOSEN, COLUMN, INK, rivalStroke } from './ink';
import { nameLines, short } from './key';
import { openSheet, type Panel, referenceLine } from './panel';
import { rangeAround } from './ticks';

const HEIGHT = 226;
const SIZE = { width: COLUMN, height: HEIGHT };
const FRAME = { left: 40, top: 22, width: COLUMN - 52, height: HEIGHT - 22 - 34 };

/** Every structure's weights, the mean cell 1, against size; null where sizes are not known for all cells. */
export function weightsFigure(result: Result): Figure | null {
  const sizes = result.cells.map((cell) => cell.effectiveSize ?? cell.size);
  const x = sizes.filter((size): size is number => size !== null && size > 0);
  if (x.length < sizes.length || x.length < 2) return null;
  const curves = [
    {
      name: structureName(result.plan.variance),
      variances: result.cells.map(({ variance }) => variance),
      stroke: CHOSEN,
    },
    ...result.beside.map(({ variance, variances }, i) => ({
      name: structureName(variance),
      variances,
      stroke: rivalStroke(i),
    })),
  ].map(({ name, variances, stroke }) => ({ name, stroke, y: relativeWeights(variances) }));
  const panel: Panel = {
    ...FRAME,
    width: COLUMN - 40 - 118,
    x: rangeAround(x, { log: true, room: 0.02 }),
    y: rangeAround(
      curves.flatMap(({ y }) => y),
      { log: true },
    ),
    xName: figureWords.residuals.size(result),
    yName: plotWords.weights.yName,
  };
  const { overlay, series, ...axes } = openSheet(SIZE, [panel]);
  const order = x.map((_, g) => g).sort((a, b) => (x[a] as number) - (x[b] as number));
  for (const { y, stroke } of curves)
    series.push({
      type: 'line',
      xAxisIndex: 0,
      yAxisIndex: 0,
      data: order.map((g) => [x[g] as number, y[g] as number]),
      symbol: 'none',
      lineStyle: { ...stroke },
      z: 3,
    });
  const last = order.at(-1) as number;
  nameLines(
    overlay,
    panel,
    curves.map(({ name, y, stroke }) => ({ name: short(name, 22), end: y[last] as number, stroke })),
  );
  return {
    id: 'weights',
    caption: plotWords.weights.caption,
    alt: plotWords.weights.alt(curves.map(({ name }) => name)),
    ...SIZE,
    option: { animation: false, ...axes, series },
    data: dataTable({
      caption: plotWords.weights.caption,
      head: [plotWords.heads.cell, plotWords.heads.size, ...curves.map(({ name }) => name)],
      rows: result.cells.map(({ label }, g) => [label, x[g] as number, ...curves.map(({ y }) => y[g] as number)]),
    }),
  };
}

function relativeWeights(variances: readonly number[]): number[] {
  const weights = variances.map((v) => 1 / v);
  const mean = weights.reduce((sum, w) => sum + w, 0) / weights.length;
  return weights.map((w) => w / mean);
}

/** Whitened or raw residuals against fitted values; null without residuals. */
export function fittedFigure(result: Result, { raw }: { readonly raw: boolean }): Figure | null {
  const words = plotWords.fitted;
  if (result.fit.residualFreedom <= 0) return null;
  const x = result.cells.map(({ fitted }) => fitted);
  const y = result.cells.map((cell) => (raw ? cell.residual : cell.whitened));
  const two = 2 * (result.fit.residualSd ?? 1);
  const panel: Panel = {
    ...FRAME,
    x: rangeAround(x),
    y: rangeAround(raw ? y : [...y, two, -two]),
    xName: words.xName(result),
    yName: raw ? words.rawName(result) : words.whitenedName,
  };
  const { overlay, series, ...axes } = openSheet(SIZE, [panel]);
  referenceLine(overlay, panel, { y: 0 });
  if (!raw) for (const at of [two, -two]) referenceLine(overlay, panel, { y: at, type: [1.2, 2] });
  series.push(pointsOf(result, x, y));
  return {
    id: raw ? 'raw-residuals' : 'whitened-residuals',
    caption: words.caption(raw),
    alt: words.alt(x.length, raw),
    ...SIZE,
    option: { animation: false, ...axes, series },
    data: dataTable({
      caption: words.caption(raw),
      head: [plotWords.heads.cell, plotWords.heads.fitted, raw ? plotWords.heads.raw : plotWords.heads.whitened],
      rows: result.cells.map(({ label }, g) => [label, x[g] as number, y[g] as number]),
    }),
  };
}

/** Whitened residuals in order against normal quantiles at (i - 3/8) / (G + 1/4); null without residuals. Source: Blom 1958. */
export function normalFigure(result: Result): Figure | null {
  const words = plotWords.normal;
  const count = result.cells.length;
  if (result.fit.residualFreedom <= 0 || count < 3) return null;
  const order = result.cells.map((_, g) => g);
  order.sort((a, b) => (result.cells[a]?.whitened as number) - (result.cells[b]?.whitened as number));
  const x = new Array<number>(count);
  for (const [i, g] of order.entries()) x[g] = normalQuantile((i + 0.625) / (count + 0.25));
  const y = result.cells.map(({ whitened }) => whitened);
  const mean = y.reduce((sum, one) => sum + one, 0) / count;
  const slope = Math.sqrt(y.reduce((sum, one) => sum + (one - mean) * (one - mean), 0) / (count - 1));
  const panel: Panel = { ...FRAME, x: rangeAround(x), y: rangeAround(y), xName: words.xName, yName: words.yName };
  const { series, overlay: _, ...axes } = openSheet(SIZE, [panel]);
  const { min, max } = panel.x;
  series.push(
    {
      type: 'line',
      xAxisIndex: 0,
      yAxisIndex: 0,
      data: [min, max].map((at) => [at, mean + slope * at]),
      symbol: 'none',
      lineStyle: { color: INK, width: 0.8 },
      clip: true,
    },
    pointsOf(result, x, y),
  );
  return {
    id: 'normal-residuals',
    caption: words.caption(slope),
    alt: words.alt(count),
    ...SIZE,
    option: { animation: false, ...axes, series },
    data: dataTable({
      caption: words.caption(slope),
      head: [plotWords.heads.cell, plotWords.heads.normal, plotWords.heads.whitened],
      rows: order.map((g) => [result.cells[g]?.label as string, x[g] as number, y[g] as number]),
    }),
  };
}

function pointsOf({ cells }: Result, x: readonly number[], y: readonly number[]) {
  return {
    type: 'scatter',
    xAxisIndex: 0,
    yAxisIndex: 0,
    data: cells.map(({ label }, g) => ({ value: [x[g] as number, y[g] as number], name: label })),
    symbol: 'circle',
    symbolSize: cells.length > 400 ? 2.2 : 3.6,
    itemStyle: { color: INK, opacity: cells.length > 400 ? 0.35 : 0.65 },
    z: 3,
  } as const;
}
