import { exp } from '../numbers/elementary';
import type { Figure, FigureSeries } from '../protocol/figure';
import type { Coefficient, ExponentSupport, Result, ScanPoint } from '../protocol/result';
import { figureHeads, figureWords, panelName } from '../words/figures';
import { headlineTerms } from '../words/headline';
import { number } from '../words/numbers';
import { dataTable } from './data-table';
import { COLUMN, INK, PALE, SMALL_SIZE } from './ink';
import { type Overlay, openSheet, type Panel, referenceLine, xAt } from './panel';
import { rangeAround } from './ticks';

const words = figureWords.scan;
const PANELS = 3;
const FIRST = 132;
const NEXT = 84;
const BETWEEN = 26;
/** What the words at the bracket take. */
const TEXT_ROOM = 96;
/** Ink that is left where the data give no support. */
const FAINTEST = 0.1;

/** Coefficients over the size exponent, ink fading as the likelihood falls, the supported exponents bracketed below; null without a scan. */
export function scanFigure(result: Result): Figure | null {
  const { exponentScan: scan, exponentSupport: support } = result;
  if (scan.length < 2 || support === null) return null;
  const terms = headlineTerms(result, PANELS);
  const ink = inkOf(result);
  let top = 22;
  const panels = terms.map((term, i): Panel => {
    const height = i === 0 ? FIRST : NEXT;
    const panel = panelOf(result, term, { top, height, last: i === terms.length - 1 });
    top += height + BETWEEN;
    return panel;
  });
  const size = { width: COLUMN, height: top + 30 };
  const { overlay, series, ...axes } = openSheet(size, panels);
  for (const [i, term] of terms.entries()) {
    const panel = panels[i] as Panel;
    if (panel.y.min < 0 && panel.y.max > 0) referenceLine(overlay, panel, { y: 0 });
    series.push(...fading(scan, { term, ink, at: i }));
  }
  const lowest = panels.at(-1) as Panel;
  bracket(overlay, lowest, support);
  overlay.text(words.xName, {
    x: lowest.left + lowest.width,
    y: lowest.top + lowest.height + 40,
    side: 'left',
    color: PALE,
  });
  return {
    id: 'exponent-scan',
    caption: words.caption(terms.length),
    alt: words.alt(terms, number(support.low, { decimals: 2 }), number(support.high, { decimals: 2 })),
    ...size,
    option: { animation: false, ...axes, series },
    data: dataTable({
      caption: words.xName,
      head: [figureHeads.exponent, figureHeads.relative, ...terms],
      rows: scan.map((point, i) => [
        number(point.delta, { decimals: 2 }),
        ink[i] as number,
        ...terms.map((term) => find(point, term)?.estimate ?? null),
      ]),
    }),
  };
}

const find = (point: ScanPoint, term: string): Coefficient | undefined =>
  point.coefficients.find((one) => one.term === term);

/** The likelihood of each exponent relative to the best, by the fit's own method. */
function inkOf({ exponentScan: scan, fit }: Result): number[] {
  const of = (point: ScanPoint): number =>
    fit.estimate.method === 'restricted' ? point.restrictedLogLikelihood : point.logLikelihood;
  const best = Math.max(...scan.map(of));
  return scan.map((point) => exp(of(point) - best));
}

function panelOf(
  { exponentScan: scan, plan }: Result,
  term: string,
  of: { top: number; height: number; last: boolean },
): Panel {
  const values = scan.flatMap((point) => {
    const one = find(point, term);
    return one === undefined ? [] : [one.estimate, one.low ?? one.estimate, one.high ?? one.estimate];
  });
  return {
    left: 40,
    top: of.top,
    width: COLUMN - 52,
    height: of.height,
    x: { min: -0.03, max: 1.53, log: false },
    y: rangeAround(values, { room: 0.08 }),
    yName: panelName(term, { plan }),
    most: 7,
    ...(of.last ? {} : { xTicks: 'none' as const }),
  };
}

/** The line in stretches from point to point, each with the ink of its two ends; ends of the interval thin. */
function fading(
  scan: readonly ScanPoint[],
  of: { readonly term: string; readonly ink: readonly number[]; readonly at: number },
): FigureSeries[] {
  const lines: readonly [(one: Coefficient) => number | null, number][] = [
    [(one) => one.estimate, 2.2],
    [(one) => one.low, 0.8],
    [(one) => one.high, 0.8],
  ];
  return lines.flatMap(([value, width]) =>
    scan.slice(1).flatMap((point, i): FigureSeries[] => {
      const before = scan[i] as ScanPoint;
      const [from, to] = [before, point].map((one) => {
        const own = find(one, of.term);
        return own === undefined ? null : value(own);
      });
      if (from === null || from === undefined || to === null || to === undefined) return [];
      const support = ((of.ink[i] as number) + (of.ink[i + 1] as number)) / 2;
      return [
        {
          type: 'line',
          xAxisIndex: of.at,
          yAxisIndex: of.at,
          data: [
            [before.delta, from],
            [point.delta, to],
          ],
          symbol: 'none',
          lineStyle: { color: INK, width, opacity: FAINTEST + (1 - FAINTEST) * support },
        },
      ];
    }),
  );
}

/** The supported range, under the ticks of the lowest panel; an open end where it is cut. */
function bracket(overlay: Overlay, panel: Panel, { low, high, best, edge }: ExponentSupport): void {
  const y = panel.top + panel.height + 24;
  const [from, to] = [xAt(panel, low), xAt(panel, high)];
  const style = { color: INK, width: 1.1 };
  overlay.line(
    [
      [from, y],
      [to, y],
    ],
    style,
  );
  if (edge !== 'low' && edge !== 'both')
    overlay.line(
      [
        [from, y - 4],
        [from, y],
      ],
      style,
    );
  if (edge !== 'high' && edge !== 'both')
    overlay.line(
      [
        [to, y - 4],
        [to, y],
      ],
      style,
    );
  overlay.line(
    [
      [xAt(panel, best), y - 3],
      [xAt(panel, best), y + 3],
    ],
    style,
  );
  const text = `${words.supported} ${number(low, { decimals: 2 })} to ${number(high, { decimals: 2 })}`;
  // Beside the bracket where there is room, else under it, in from the end that it reaches.
  const after = panel.left + panel.width - to > TEXT_ROOM;
  const before = from - panel.left > TEXT_ROOM;
  overlay.text(text, {
    x: after ? to + 3 : before ? from - 3 : from,
    y: after || before ? y - 1 : y + 8,
    side: after || !before ? 'right' : 'left',
    size: SMALL_SIZE,
  });
}
