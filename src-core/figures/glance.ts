import type { DataLook } from '../protocol/data-look';
import type { DraftPlan } from '../protocol/draft';
import type { Figure } from '../protocol/figure';
import type { Table } from '../protocol/page-table';
import type { Plan } from '../protocol/plan';
import { exact } from '../words/numbers';
import { glanceTexts } from '../words/screen-data';
import { columnWithUnit, outcomeName } from '../words/units';
import { COLUMN, INK } from './ink';
import { openSheet } from './panel';
import { planeOf } from './plane';
import { rangeAround } from './ticks';

const HEIGHT = 210;
/** Points thin out where they are many. */
const MANY = 400;

/** The used cells before any fit: outcome against size, or against their place in the file where no size is named. Null where nothing can be drawn. */
export function glance(plan: Plan | DraftPlan, look: DataLook): Figure | null {
  const bySize = plan.roles.size !== null || plan.roles.exposure !== null;
  const points = look.rows.flatMap(({ reason, label, outcome, size, row }) => {
    const x = bySize ? size : row;
    return reason !== null || outcome === null || x === null || (bySize && x <= 0) ? [] : [{ label, x, y: outcome }];
  });
  if (points.length === 0) return null;
  const whole = plan as Plan;
  const xName = bySize ? columnWithUnit(plan.roles.size ?? plan.roles.exposure ?? '', whole) : glanceTexts.byOrder;
  const yColumn = plan.roles.outcome;
  const yName = yColumn === null ? outcomeName(whole) : columnWithUnit(yColumn, whole);
  const panel = {
    left: 40,
    top: 22,
    width: COLUMN - 50,
    height: HEIGHT - 22 - 34,
    x: rangeAround(
      points.map(({ x }) => x),
      { log: bySize, room: 0.03 },
    ),
    y: rangeAround(points.map(({ y }) => y)),
    xName,
    yName,
  };
  const caption = glanceTexts.caption(
    outcomeName(whole),
    bySize ? (plan.roles.size ?? plan.roles.exposure ?? '') : xName,
  );
  const { overlay: _overlay, series, ...axes } = openSheet({ width: COLUMN, height: HEIGHT }, [panel]);
  let table: Table | null = null;
  const plane = planeOf(panel, series.length);
  series.push({
    type: 'scatter',
    xAxisIndex: 0,
    yAxisIndex: 0,
    data: points.map(({ label, x, y }) => ({ value: [x, y], name: label })),
    symbol: 'circle',
    symbolSize: points.length > MANY ? 2 : 3.4,
    itemStyle: { color: INK, opacity: points.length > MANY ? 0.35 : 0.6 },
  });
  return {
    id: 'glance',
    caption,
    alt: glanceTexts.alt(points.length, yName, xName),
    width: COLUMN,
    height: HEIGHT,
    option: { animation: false, ...axes, series },
    plane,
    // Written out when it is asked for, once: of many cells it takes longer than the figure.
    get data() {
      table ??= tableOf(points, { caption, names: [glanceTexts.cell, xName, yName] });
      return table;
    },
  };
}

function tableOf(
  points: readonly { readonly label: string; readonly x: number; readonly y: number }[],
  { caption, names }: { readonly caption: string; readonly names: readonly string[] },
): Table {
  return {
    caption,
    head: names.map((text, i) => ({ text, align: i === 0 ? 'left' : 'right' })),
    rows: points.map(({ label, x, y }) => [
      { value: label, text: label },
      ...[x, y].map((value) => ({ value, text: exact(value) })),
    ]),
  };
}
