import type { Figure, FigureSeries } from '../protocol/figure';
import type { Coefficient, Result } from '../protocol/result';
import { figureHeads, figureWords, panelName, stripText } from '../words/figures';
import { headlineTerms } from '../words/headline';
import { decimalsBy } from '../words/numbers';
import { structureName } from '../words/structures';
import { dataTable } from './data-table';
import { FULL, INK, SMALL_SIZE } from './ink';
import { short } from './key';
import { type Overlay, openSheet, type Panel, referenceLine, yAt } from './panel';
import { rangeAround } from './ticks';

const words = figureWords.beside;
const PANELS = 3;
const ROW = 13;
const LEFT = 118;
const RIGHT = 128;
const MOST_ROWS = 14;

interface Strip {
  readonly name: string;
  readonly term: string;
  readonly estimate: number;
  readonly low: number | null;
  readonly high: number | null;
  readonly chosen: boolean;
}

/** Coefficients of up to three terms with their intervals, the stated structure and those beside it one below the other; null with none beside. */
export function intervalsBeside(result: Result): Figure | null {
  const terms = headlineTerms(result, PANELS);
  const groups = terms.map((term) => stripsOf(result, term));
  const rows = groups[0]?.length ?? 0;
  if (rows < 2) return null;
  const height = rows * ROW + 8;
  const panels = groups.map((strips, i): Panel => panelOf(result, strips, { top: 22 + i * (height + 44), height }));
  const size = { width: FULL, height: 22 + groups.length * (height + 44) - 18 };
  const { overlay, series, ...axes } = openSheet(size, panels);
  for (const [i, strips] of groups.entries()) {
    const panel = panels[i] as Panel;
    drawRules(overlay, panel, result.plan.matters[terms[i] as string] ?? null);
    drawStrips({ overlay, series, panel, at: i, strips, decimals: decimalsFor(result, terms[i] as string) });
  }
  return {
    id: 'intervals-beside',
    caption: words.caption(terms.length),
    alt: words.alt(terms, rows),
    ...size,
    option: { animation: false, ...axes, series },
    data: dataTable({
      caption: words.caption(terms.length),
      head: [
        figureHeads.structure,
        ...terms.flatMap((term) => [`${term}: ${figureHeads.estimate}`, figureHeads.low, figureHeads.high]),
      ],
      rows: (groups[0] as Strip[]).map(({ name }, r) => [
        name,
        ...groups.flatMap((strips) => [strips[r]?.estimate ?? null, strips[r]?.low ?? null, strips[r]?.high ?? null]),
      ]),
    }),
  };
}

function decimalsFor({ fit }: Result, term: string): number {
  const own = fit.coefficients.find((one) => one.term === term) as Coefficient;
  return decimalsBy(own.se, own.estimate);
}

function stripsOf(result: Result, term: string): Strip[] {
  const pick = (coefficients: readonly Coefficient[]): Coefficient | undefined =>
    coefficients.find((one) => one.term === term);
  const own = pick(result.fit.coefficients) as Coefficient;
  const robust = result.overturn.find(
    (one) => one.term === term && one.change.kind === 'robust' && one.change.what !== 'model',
  );
  const strips: Strip[] = [{ ...own, name: words.chosen(result), chosen: true }];
  if (robust !== undefined) strips.push({ ...robust, name: words.robust(robust.change.what), chosen: false });
  for (const { variance, coefficients } of result.beside) {
    const there = pick(coefficients);
    if (there !== undefined) strips.push({ ...there, name: structureName(variance), chosen: false });
  }
  return strips.slice(0, MOST_ROWS);
}

function panelOf(result: Result, strips: readonly Strip[], { top, height }: { top: number; height: number }): Panel {
  const [{ term, estimate }] = strips as [Strip];
  const ends = strips.flatMap((one) => [one.estimate, one.low, one.high]).filter((value) => value !== null);
  const spread = Math.max(...ends) - Math.min(...ends);
  const matters = result.plan.matters[term];
  const marks = [0, ...(matters === undefined ? [] : [estimate < 0 ? -matters : matters])];
  // Zero and the difference that matters are drawn where they are not so far off that the strips would shrink to nothing.
  const near = marks.filter((mark) => mark >= Math.min(...ends) - 2 * spread && mark <= Math.max(...ends) + 2 * spread);
  return {
    left: LEFT,
    top,
    width: FULL - LEFT - RIGHT,
    height,
    x: rangeAround([...ends, ...near], { room: 0.04 }),
    y: { min: 0, max: strips.length, log: false },
    yTicks: 'none',
    yName: panelName(term, result),
  };
}

function drawRules(overlay: Overlay, panel: Panel, matters: number | null): void {
  const inside = (x: number): boolean => x > panel.x.min && x < panel.x.max;
  if (inside(0)) referenceLine(overlay, panel, { x: 0 });
  if (matters === null) return;
  for (const x of [-matters, matters]) if (inside(x)) referenceLine(overlay, panel, { x, type: [2.5, 2] });
}

function drawStrips(of: {
  readonly overlay: Overlay;
  readonly series: FigureSeries[];
  readonly panel: Panel;
  readonly at: number;
  readonly strips: readonly Strip[];
  readonly decimals: number;
}): void {
  const { overlay, series, panel, at, strips, decimals } = of;
  const axes = { xAxisIndex: at, yAxisIndex: at } as const;
  for (const [i, strip] of strips.entries()) {
    const level = strips.length - i - 0.5;
    const y = yAt(panel, level);
    const ink = { color: INK, opacity: strip.chosen ? 1 : 0.85 };
    if (strip.low !== null && strip.high !== null)
      series.push({
        ...axes,
        type: 'line',
        name: strip.name,
        data: [
          [strip.low, level],
          [strip.high, level],
        ],
        symbol: 'none',
        lineStyle: { color: INK, width: strip.chosen ? 2.4 : 0.9 },
      });
    series.push({
      ...axes,
      type: 'scatter',
      data: [[strip.estimate, level]],
      symbol: 'rect',
      symbolSize: [strip.chosen ? 1.8 : 1.1, 8],
      itemStyle: ink,
      z: 4,
    });
    overlay.text(short(strip.name, 27), { x: panel.left - 4, y, side: 'left' });
    overlay.text(stripText(strip, decimals), { x: panel.left + panel.width + 6, y, side: 'right', size: SMALL_SIZE });
  }
}
