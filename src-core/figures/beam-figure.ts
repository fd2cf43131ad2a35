import type { Figure, FigureSeries } from '../protocol/figure';
import type { Beam, Result } from '../protocol/result';
import { figureHeads, figureWords } from '../words/figures';
import { headlineTerm } from '../words/headline';
import { dataTable } from './data-table';
import { COLUMN, INK, PALE, SMALL_SIZE } from './ink';
import { short } from './key';
import { type Overlay, openSheet, type Panel, spread, xAt, yAt } from './panel';
import { rangeAround } from './ticks';
import { workingValues } from './working-values';

const words = figureWords.beam;
const HEIGHT = 200;
const NAMED = 5;
/** A letter of a name is about this wide, in points. */
const LETTER = 3.7;
/** Less room than this, in points, is none for a name. */
const FEWEST = 34;
/** Room for names at either end of the beam, as a share of its length. */
const ENDS = 0.3;
/** Beyond this many cells stems would fill the figure. */
const MOST_STEMS = 300;

interface Load {
  readonly label: string;
  readonly pull: number;
  readonly distance: number;
  readonly heavy: boolean;
}

/** Each cell at its pull on the answer's coefficient, as far off as its value is from the weighted mean; null where there is no beam of it. */
export function beamFigure(result: Result, term: string = headlineTerm(result)): Figure | null {
  const beam = result.beam.find((one) => one.term === term);
  const own = result.fit.coefficients.find((one) => one.term === term);
  if (beam === undefined || own === undefined || beam.pulls.length === 0) return null;
  const from = beam.contributions === null ? 'zero' : 'mean';
  const loads = loadsOf(result, beam);
  const panel: Panel = {
    left: 40,
    top: 22,
    width: COLUMN - 52,
    height: HEIGHT - 22 - 34,
    x: rangeAround([0, ...loads.map(({ pull }) => pull)], { room: ENDS }),
    y: rangeAround([0, ...loads.map(({ distance }) => distance)], { room: 0.1 }),
    xName: words.xName(term),
    yName: words.yName(result, from),
  };
  const size = { width: COLUMN, height: HEIGHT };
  const { overlay, series, ...axes } = openSheet(size, [panel]);
  drawBeam(overlay, panel);
  series.push(...seriesOf(loads));
  const named = [...loads]
    .sort((a, b) => Math.abs(b.pull) - Math.abs(a.pull))
    .slice(0, Math.min(NAMED, beam.heaviest.cells.length));
  nameLoads(overlay, panel, named);
  return {
    id: 'beam',
    caption: words.caption(term),
    alt: words.alt(
      term,
      loads.length,
      named.map(({ label }) => label),
    ),
    ...size,
    option: { animation: false, ...axes, series },
    data: dataTable({
      caption: term,
      head: [figureHeads.cell, figureHeads.pull, figureHeads.distance],
      rows: loads.map(({ label, pull, distance }) => [label, pull, distance]),
    }),
  };
}

/** Distances from the mean are contributions over pulls; the mean itself is read off the cell of the largest pull. */
function loadsOf(result: Result, { pulls, contributions, heaviest }: Beam): Load[] {
  const values = workingValues(result);
  const heavy = new Set(heaviest.cells);
  const most = pulls.reduce((at, pull, g) => (Math.abs(pull) > Math.abs(pulls[at] as number) ? g : at), 0);
  const pull = pulls[most] as number;
  const mean =
    contributions === null || pull === 0 ? 0 : (values[most] as number) - (contributions[most] as number) / pull;
  return result.cells.map(({ label }, g) => ({
    label,
    pull: pulls[g] as number,
    distance: (values[g] as number) - mean,
    heavy: heavy.has(label),
  }));
}

function drawBeam(overlay: Overlay, panel: Panel): void {
  const y = yAt(panel, 0);
  overlay.line(
    [
      [panel.left, y],
      [panel.left + panel.width, y],
    ],
    { color: INK, width: 1.3 },
  );
  const x = xAt(panel, 0);
  // The fulcrum.
  overlay.line(
    [
      [x - 5, y + 8],
      [x, y],
      [x + 5, y + 8],
      [x - 5, y + 8],
    ],
    { color: INK, width: 0.9 },
  );
}

function seriesOf(loads: readonly Load[]): FigureSeries[] {
  const axes = { xAxisIndex: 0, yAxisIndex: 0 } as const;
  const stems: FigureSeries[] =
    loads.length > MOST_STEMS
      ? []
      : loads.map(({ pull, distance, heavy }) => ({
          ...axes,
          type: 'line',
          data: [
            [pull, 0],
            [pull, distance],
          ],
          symbol: 'none',
          lineStyle: { color: heavy ? INK : PALE, width: heavy ? 0.7 : 0.4, opacity: heavy ? 1 : 0.7 },
        }));
  const marks = (heavy: boolean): FigureSeries => ({
    ...axes,
    type: 'scatter',
    data: loads.filter((one) => one.heavy === heavy).map(({ pull, distance }) => [pull, distance]),
    symbol: 'circle',
    symbolSize: loads.length > MOST_STEMS ? 2.4 : 3.8,
    itemStyle: heavy ? { color: INK } : { color: '#ffffff', borderColor: PALE, borderWidth: 0.6 },
    z: heavy ? 4 : 3,
  });
  return [...stems, marks(false), marks(true)];
}

/** Names stand outward of their marks, where fewer cells are, apart from each other on either side. */
function nameLoads(overlay: Overlay, panel: Panel, loads: readonly Load[]): void {
  for (const side of ['left', 'right'] as const) {
    const own = loads.filter(({ pull }) => (side === 'left' ? pull < 0 : pull >= 0));
    const places = spread(
      own.map(({ distance }) => yAt(panel, distance)),
      { gap: 9, low: panel.top, high: panel.top + panel.height - 4 },
    );
    for (const [i, { label, pull }] of own.entries()) {
      const x = xAt(panel, pull);
      const room = side === 'left' ? x - panel.left : panel.left + panel.width - x;
      if (room < FEWEST) continue;
      const name = short(label, Math.floor((room - 6) / LETTER));
      overlay.text(name, { x: x + (side === 'left' ? -4 : 4), y: places[i] as number, side, size: SMALL_SIZE });
    }
  }
}
