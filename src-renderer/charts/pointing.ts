import type { NamedPoint } from './dress';
import type { EChartsType } from './library';

/** A cell's point where it stands on the screen, in pixels of its figure. */
export interface Placed {
  readonly name: string;
  readonly x: number;
  readonly y: number;
}

/** Pointing further off than this many pixels marks nothing. */
export const REACH = 24;

/** Where the cells' points stand. */
export function placedPoints(chart: EChartsType, points: readonly NamedPoint[]): readonly Placed[] {
  return points.flatMap(({ name, value, series }) => {
    const place = chart.convertToPixel({ seriesIndex: series }, [...value] as number[]) as number[] | undefined;
    const [x, y] = place ?? [];
    return x === undefined || y === undefined || !Number.isFinite(x + y) ? [] : [{ name, x, y }];
  });
}

/** The nearest point within reach; null where there is none. */
export function nearestPoint(points: readonly Placed[], x: number, y: number): Placed | null {
  let nearest: Placed | null = null;
  let least = REACH * REACH;
  for (const point of points) {
    const distance = (point.x - x) ** 2 + (point.y - y) ** 2;
    if (distance >= least) continue;
    nearest = point;
    least = distance;
  }
  return nearest;
}
