import { exp, log } from '../numbers/elementary';
import type { Figure, FigureOption, FigurePlane, FigureSeries } from '../protocol/figure';
import { openSheet, type Panel } from './panel';
import type { Range } from './ticks';

/** A figure whose points can be moved about. */
export type PlaneFigure = Figure & { readonly plane: FigurePlane };

/** The plane of a figure that has one panel. axes: so many series drew its axes; they came first. */
export function planeOf({ left, top, width, height, x, y, xName, yName }: Panel, axes: number): FigurePlane {
  const names = { ...(xName === undefined ? {} : { xName }), ...(yName === undefined ? {} : { yName }) };
  return { left, top, width, height, x, y, ...names, axes };
}

/** The part of a plane that is in view, as shares of its whole width and height from its lower left corner. */
export interface View {
  readonly left: number;
  readonly right: number;
  readonly bottom: number;
  readonly top: number;
}

export const wholeView: View = { left: 0, right: 1, bottom: 0, top: 1 };

/** A part of a range, by shares of its length, or of its logarithm's. Example: the upper half of 1 to 100 by factors is 10 to 100. */
export function partOf(range: Range, from: number, to: number): Range {
  return { min: valueAt(range, from), max: valueAt(range, to), log: range.log };
}

function valueAt({ min, max, log: byFactor }: Range, share: number): number {
  if (share === 0) return min;
  if (share === 1) return max;
  return byFactor ? min * exp(share * log(max / min)) : min + share * (max - min);
}

/**
 * A figure's option with a part of its plane in view: its axes drawn anew, and what is drawn on them moved along.
 *
 * What stands at the right of the plane, such as names of lines, follows its height; what stands above and below stays. What leaves the frame is left out.
 */
export function movedOption(figure: PlaneFigure, view: View): FigureOption {
  const { option, plane, width, height } = figure;
  const [x, y] = [partOf(plane.x, view.left, view.right), partOf(plane.y, view.bottom, view.top)];
  const sheet = openSheet({ width, height }, [{ ...plane, x, y }]);
  const rest = option.series.slice(plane.axes).flatMap((one) => (isOnPlane(one) ? [one] : moved(one, plane, view)));
  return { ...option, grid: sheet.grid, xAxis: sheet.xAxis, yAxis: sheet.yAxis, series: [...sheet.series, ...rest] };
}

/** Series of the panel's own axes; the others are drawn over them, in points of the figure. */
export function isOnPlane({ xAxisIndex }: FigureSeries): boolean {
  return xAxisIndex === 0;
}

/** An overlaid series where it stands in a view; empty where it leaves the frame. */
function moved(series: FigureSeries, plane: FigurePlane, view: View): FigureSeries[] {
  const [right, foot] = [plane.left + plane.width, plane.top + plane.height];
  const data: [number, number][] = [];
  for (const point of series.data) {
    const [x, y] = ('value' in point ? point.value : point) as readonly [number, number];
    if (y > foot + 1 || y < plane.top - 1 || x < plane.left) {
      data.push([x, y]);
      continue;
    }
    const across = ((x - plane.left) / plane.width - view.left) / (view.right - view.left);
    const up = ((foot - y) / plane.height - view.bottom) / (view.top - view.bottom);
    if (up < 0 || up > 1 || (x < right && (across < 0 || across > 1))) return [];
    data.push([x < right ? plane.left + across * plane.width : x, foot - up * plane.height]);
  }
  return [{ ...series, data }];
}
