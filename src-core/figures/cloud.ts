import { log as logarithm } from '../numbers/elementary';
import type { Figure, FigureSeries } from '../protocol/figure';
import { isOnPlane, type PlaneFigure, type View } from './plane';

/** A series of more points than this is drawn as a cloud: a raster of how many points lie on each pixel. As shapes it would be slow. */
export const MANY = 2000;

/** Many points of one look, placed on their plane: 0 to 1 across and up. */
export interface Cloud {
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Label of the cell that each point stands for; undefined where it stands for none. */
  readonly names: readonly (string | undefined)[];
  /** Width of a point, in points of print. */
  readonly size: number;
  readonly opacity: number;
}

/** A figure parted into what the chart library draws and the clouds; null for a figure without clouds. */
export interface Parted {
  readonly frame: PlaneFigure;
  readonly clouds: readonly Cloud[];
}

export function partedFigure(figure: Figure): Parted | null {
  const { plane, option } = figure;
  if (plane === undefined || !option.series.some(isCloud)) return null;
  const clouds = option.series.filter(isCloud).map((series) => cloudOf(series, plane));
  // Not spread: the numbers as a table are written out only when they are asked for.
  const { id, caption, alt, width, height } = figure;
  const rest = { ...option, series: option.series.filter((one) => !isCloud(one)) };
  const frame: PlaneFigure = {
    id,
    caption,
    alt,
    width,
    height,
    plane,
    option: rest,
    data: { caption, head: [], rows: [] },
  };
  return { frame, clouds };
}

function isCloud(series: FigureSeries): boolean {
  return series.type === 'scatter' && isOnPlane(series) && series.data.length > MANY;
}

function cloudOf(series: FigureSeries, plane: PlaneFigure['plane']): Cloud {
  const { data, symbolSize, itemStyle } = series;
  const x = new Float64Array(data.length);
  const y = new Float64Array(data.length);
  const names = new Array<string | undefined>(data.length);
  const [across, up] = [placer(plane.x), placer(plane.y)];
  for (const [i, point] of data.entries()) {
    const named = 'value' in point;
    const [a, b] = named ? point.value : point;
    x[i] = across(a as number);
    y[i] = up(b as number);
    names[i] = named ? point.name : undefined;
  }
  return { x, y, names, size: typeof symbolSize === 'number' ? symbolSize : 2, opacity: itemStyle?.opacity ?? 1 };
}

function placer({ min, max, log }: PlaneFigure['plane']['x']): (value: number) => number {
  if (!log) return (value) => (value - min) / (max - min);
  const [low, length] = [logarithm(min), logarithm(max / min)];
  return (value) => (logarithm(value) - low) / length;
}

/** A raster that clouds are counted on: its pixels, and how many of them there are to a point of print. */
export interface Raster {
  readonly width: number;
  readonly height: number;
  readonly scale: number;
}

/** How many points lie on each pixel, 255 for that many or more; row by row from the top. */
export function countsOf(cloud: Cloud, view: View, { width, height, scale }: Raster): Uint8Array {
  const counts = new Uint8Array(width * height);
  const { x, y } = cloud;
  const offsets = discOf(Math.max(1, Math.round(cloud.size * scale)));
  const across = width / (view.right - view.left);
  const up = height / (view.top - view.bottom);
  const [left, top] = [view.left, view.top];
  for (let i = 0; i < x.length; i++) {
    const column = Math.floor(((x[i] as number) - left) * across);
    const row = Math.floor((top - (y[i] as number)) * up);
    if (column < 0 || column >= width || row < 0 || row >= height) continue;
    for (const [dx, dy] of offsets) {
      const [c, r] = [column + dx, row + dy];
      if (c < 0 || c >= width || r < 0 || r >= height) continue;
      const at = r * width + c;
      if ((counts[at] as number) < 255) counts[at] = (counts[at] as number) + 1;
    }
  }
  return counts;
}

/** Pixels of a disc so many pixels wide, from its middle. */
function discOf(wide: number): readonly (readonly [number, number])[] {
  const middle = (wide - 1) / 2;
  const steps = Array.from({ length: wide }, (_, i) => i - Math.floor(wide / 2));
  const reach = (wide * wide) / 4 + 0.1;
  const shift = Math.floor(wide / 2) - middle;
  return steps.flatMap((dx) =>
    steps.filter((dy) => square(dx + shift) + square(dy + shift) <= reach).map((dy) => [dx, dy] as const),
  );
}

const square = (value: number) => value * value;

/** The point nearest to a place on the plane that stands for a cell, within reach; distances in pixels. */
export function nearestIn(
  clouds: readonly Cloud[],
  at: { readonly x: number; readonly y: number },
  { across, up, reach }: { readonly across: number; readonly up: number; readonly reach: number },
): string | null {
  let nearest: string | null = null;
  let least = reach * reach;
  for (const { x, y, names } of clouds)
    for (let i = 0; i < x.length; i++) {
      const [dx, dy] = [((x[i] as number) - at.x) * across, ((y[i] as number) - at.y) * up];
      const distance = dx * dx + dy * dy;
      const name = distance < least ? names[i] : undefined;
      if (name === undefined) continue;
      least = distance;
      nearest = name;
    }
  return nearest;
}

/** Every place of a cell's points. */
export function placesOf(
  clouds: readonly Cloud[],
  name: string | null,
): readonly { readonly x: number; readonly y: number }[] {
  if (name === null) return [];
  return clouds.flatMap(({ x, y, names }) =>
    names.flatMap((own, i) => (own === name ? [{ x: x[i] as number, y: y[i] as number }] : [])),
  );
}

/** The cell a step further to the right or the left of a cell among those in view; the first or last where none is marked. */
export function stepFrom(clouds: readonly Cloud[], name: string | null, step: 1 | -1): string | null {
  const order = clouds
    .flatMap(({ x, names }) => names.flatMap((own, i) => (own === undefined ? [] : [{ name: own, x: x[i] as number }])))
    .sort((a, b) => a.x - b.x);
  const at = order.findIndex((one) => one.name === name);
  return order[Math.max(0, Math.min(order.length - 1, at + step))]?.name ?? null;
}
