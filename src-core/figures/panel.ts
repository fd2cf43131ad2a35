import type { FigureAxis, FigureGrid, FigureSeries, LineStyle } from '../protocol/figure';
import { FAINT, INK, LABEL_SIZE, PALE } from './ink';
import { placeIn, type Range, ticksOf, tickText } from './ticks';

/** Size of a whole figure, in points. */
export interface Size {
  readonly width: number;
  readonly height: number;
}

/** One pair of axes in a figure, placed from its top left corner. */
export interface Panel {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
  readonly x: Range;
  readonly y: Range;
  /** Stands under the axis, and over it. */
  readonly xName?: string;
  readonly yName?: string;
  /** Nothing is written at the ticks; none: no axis at all. */
  readonly xTicks?: 'none';
  readonly yTicks?: 'none';
  readonly most?: number;
}

/** Draws in points from the figure's top left corner: ticks, names, labels, keys. */
export interface Overlay {
  readonly line: (points: readonly (readonly [number, number])[], style: LineStyle) => void;
  readonly text: (text: string, at: Place) => void;
  readonly mark: (x: number, y: number, as: Mark) => void;
}

export interface Mark {
  readonly size: readonly [number, number];
  /** Filled with ink, or open. */
  readonly open?: boolean;
  readonly symbol?: 'rect' | 'diamond' | 'triangle';
}

export interface Place {
  readonly x: number;
  readonly y: number;
  /** On which side of the place the text stands. */
  readonly side: 'left' | 'right' | 'top' | 'bottom';
  readonly size?: number;
  readonly color?: string;
}

/** The parts of a chart option that panels and overlay make together. */
export interface Sheet {
  readonly grid: FigureGrid[];
  readonly xAxis: FigureAxis[];
  readonly yAxis: FigureAxis[];
  readonly series: FigureSeries[];
  readonly overlay: Overlay;
}

/** Where the text of a label begins, from its place. */
const DISTANCE = 5;
const TICK = 3;

/** Opens a figure with its panels, axes drawn; the overlay is the last grid. Series of panel i take axes i. */
export function openSheet(size: Size, panels: readonly Panel[]): Sheet {
  const grid = panels.map(({ left, top, width, height }) => ({
    left,
    top,
    right: size.width - left - width,
    bottom: size.height - top - height,
  }));
  const at = panels.length;
  const series: FigureSeries[] = [];
  const sheet: Sheet = {
    grid: [...grid, { left: 0, top: 0, right: 0, bottom: 0 }],
    xAxis: [...panels.map(({ x }, i) => bare(x, i)), bare({ min: 0, max: size.width, log: false }, at)],
    yAxis: [
      ...panels.map(({ y }, i) => bare(y, i)),
      { ...bare({ min: 0, max: size.height, log: false }, at), inverse: true },
    ],
    series,
    overlay: overlayOn(series, at),
  };
  for (const panel of panels) drawAxes(sheet.overlay, panel);
  return sheet;
}

function bare({ min, max, log }: Range, gridIndex: number): FigureAxis {
  return { type: log ? 'log' : 'value', gridIndex, min, max, show: false };
}

function overlayOn(series: FigureSeries[], at: number): Overlay {
  const axes = { xAxisIndex: at, yAxisIndex: at, silent: true, clip: false } as const;
  return {
    line: (points, lineStyle) => {
      series.push({ ...axes, type: 'line', data: points, symbol: 'none', lineStyle, z: 1 });
    },
    text: (text, { x, y, side, size = LABEL_SIZE, color = INK }) => {
      const shift = { left: DISTANCE, right: -DISTANCE, top: 0, bottom: 0 }[side];
      series.push({
        ...axes,
        type: 'scatter',
        data: [[x + shift, y]],
        symbol: 'circle',
        symbolSize: 0.01,
        itemStyle: { color: 'transparent' },
        label: { show: true, position: side, formatter: text, fontSize: size, color },
      });
    },
    mark: (x, y, { size, open = false, symbol = 'rect' }) => {
      const itemStyle = open ? { color: '#ffffff', borderColor: INK, borderWidth: 0.5 } : { color: INK, opacity: 1 };
      series.push({ ...axes, type: 'scatter', data: [[x, y]], symbol, symbolSize: size, itemStyle });
    },
  };
}

/** Where a value of a panel stands in the figure. */
export function xAt(panel: Panel, value: number): number {
  return panel.left + panel.width * placeIn(panel.x, value);
}

export function yAt(panel: Panel, value: number): number {
  return panel.top + panel.height * (1 - placeIn(panel.y, value));
}

function drawAxes(overlay: Overlay, panel: Panel): void {
  const { left, top, width, height, xName, yName, most = 6 } = panel;
  const rule: LineStyle = { color: INK, width: 0.6 };
  const foot = top + height;
  if (panel.xTicks !== 'none') {
    overlay.line(
      [
        [left, foot],
        [left + width, foot],
      ],
      rule,
    );
    for (const tick of ticksOf(panel.x, most)) {
      const x = xAt(panel, tick);
      overlay.line(
        [
          [x, foot],
          [x, foot + TICK],
        ],
        rule,
      );
      overlay.text(tickText(tick), { x, y: foot + 1, side: 'bottom' });
    }
  }
  if (panel.yTicks !== 'none') {
    overlay.line(
      [
        [left, top],
        [left, foot],
      ],
      rule,
    );
    for (const tick of ticksOf(panel.y, Math.max(3, Math.round(height / 32)))) {
      const y = yAt(panel, tick);
      overlay.line(
        [
          [left - TICK, y],
          [left, y],
        ],
        rule,
      );
      overlay.text(tickText(tick), { x: left - TICK - 2.5, y, side: 'left' });
    }
  }
  if (yName !== undefined) overlay.text(yName, { x: 0, y: top - 10, side: 'right', color: PALE });
  if (xName !== undefined) overlay.text(xName, { x: left + width, y: foot + 20, side: 'left', color: PALE });
}

/** A thin line of reference across a panel. */
export function referenceLine(
  overlay: Overlay,
  panel: Panel,
  of: { readonly x?: number; readonly y?: number; readonly type?: LineStyle['type'] },
): void {
  const style: LineStyle = { color: FAINT, width: 0.7, type: of.type ?? 'solid' };
  const { left, top, width, height } = panel;
  if (of.x !== undefined)
    overlay.line(
      [
        [xAt(panel, of.x), top],
        [xAt(panel, of.x), top + height],
      ],
      style,
    );
  if (of.y !== undefined)
    overlay.line(
      [
        [left, yAt(panel, of.y)],
        [left + width, yAt(panel, of.y)],
      ],
      style,
    );
}

/** Moves labels apart so that none is nearer than gap to the next, all between low and high; the order stays. */
export function spread(
  places: readonly number[],
  of: { readonly gap: number; readonly low: number; readonly high: number },
): number[] {
  const order = places.map((place, i) => ({ place, i })).sort((a, b) => a.place - b.place || a.i - b.i);
  const moved = order.map(({ place }) => place);
  for (const [i, place] of moved.entries()) if (i > 0) moved[i] = Math.max(place, (moved[i - 1] as number) + of.gap);
  let limit = of.high;
  for (let i = moved.length - 1; i >= 0; i--) {
    moved[i] = Math.min(moved[i] as number, limit);
    limit = (moved[i] as number) - of.gap;
  }
  const result = new Array<number>(places.length).fill(0);
  for (const [rank, { i }] of order.entries()) result[i] = Math.max(of.low, moved[rank] as number);
  return result;
}
