import type { Table } from './page-table';

/**
 * A figure as plain data, drawn on screen and in print from the same value: no function, no formatter; every label is ready text.
 * `option` is a subset of what the chart library takes; a test beside each of its importers checks that.
 */
export interface Figure {
  readonly id: string;
  readonly caption: string;
  /** What the figure shows, in words, for readers who do not see it. */
  readonly alt: string;
  /** In points of print, which are the units of the option's sizes. */
  readonly width: number;
  readonly height: number;
  readonly option: FigureOption;
  /** The numbers drawn. */
  readonly data: Table;
  /** Its one pair of axes, of which the window may show a part. */
  readonly plane?: FigurePlane;
}

/** One pair of axes, in points from the figure's top left corner. */
export interface FigurePlane {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
  readonly x: { readonly min: number; readonly max: number; readonly log: boolean };
  readonly y: { readonly min: number; readonly max: number; readonly log: boolean };
  readonly xName?: string;
  readonly yName?: string;
  /** So many of the first series draw the axes. */
  readonly axes: number;
}

export interface FigureOption {
  readonly animation: false;
  readonly grid: FigureGrid | readonly FigureGrid[];
  readonly xAxis: FigureAxis | readonly FigureAxis[];
  readonly yAxis: FigureAxis | readonly FigureAxis[];
  readonly series: readonly FigureSeries[];
  readonly graphic?: readonly FigureText[];
}

export interface FigureGrid {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

export interface FigureAxis {
  readonly type: 'value' | 'log' | 'category';
  /** Which of several grids, from 0. */
  readonly gridIndex?: number;
  readonly name?: string;
  readonly nameLocation?: 'middle' | 'end' | 'start';
  readonly nameGap?: number;
  readonly min?: number;
  readonly max?: number;
  readonly interval?: number;
  readonly data?: readonly string[];
  readonly inverse?: boolean;
  readonly show?: boolean;
  readonly position?: 'left' | 'right' | 'top' | 'bottom';
  readonly axisLine?: { readonly show?: boolean; readonly onZero?: boolean; readonly lineStyle?: LineStyle };
  readonly axisTick?: { readonly show?: boolean; readonly length?: number };
  readonly axisLabel?: {
    readonly show?: boolean;
    readonly fontSize?: number;
    readonly interval?: number;
    readonly color?: string;
  };
  readonly splitLine?: { readonly show: boolean; readonly lineStyle?: LineStyle };
  readonly nameTextStyle?: { readonly fontSize?: number; readonly color?: string };
}

export interface LineStyle {
  readonly color?: string;
  readonly width?: number;
  readonly type?: 'solid' | 'dashed' | 'dotted' | readonly number[];
  readonly opacity?: number;
}

export interface FigureSeries {
  readonly type: 'line' | 'scatter' | 'bar';
  /** Which of several axes, from 0. */
  readonly xAxisIndex?: number;
  readonly yAxisIndex?: number;
  readonly name?: string;
  readonly data: readonly (readonly (number | string | null)[] | FigurePoint)[];
  readonly symbol?: 'circle' | 'rect' | 'diamond' | 'triangle' | 'none';
  readonly symbolSize?: number | readonly [number, number];
  readonly lineStyle?: LineStyle;
  readonly itemStyle?: {
    readonly color?: string;
    readonly opacity?: number;
    readonly borderColor?: string;
    readonly borderWidth?: number;
  };
  readonly areaStyle?: { readonly color?: string; readonly opacity?: number };
  readonly barWidth?: number;
  readonly step?: 'start' | 'middle' | 'end';
  readonly silent?: boolean;
  readonly z?: number;
  readonly label?: FigureLabel;
  readonly endLabel?: FigureLabel;
  readonly clip?: boolean;
}

export interface FigurePoint {
  readonly value: readonly (number | string | null)[];
  readonly name?: string;
  readonly label?: FigureLabel;
  readonly itemStyle?: { readonly color?: string; readonly opacity?: number };
  readonly symbolSize?: number;
}

export interface FigureLabel {
  readonly show: boolean;
  readonly position?: 'left' | 'right' | 'top' | 'bottom' | 'inside';
  readonly formatter?: string;
  readonly fontSize?: number;
  readonly color?: string;
}

/** Ready text at a place of the figure, in its own units. */
export interface FigureText {
  readonly type: 'text';
  readonly left: number;
  readonly top: number;
  readonly style: {
    readonly text: string;
    readonly fontSize?: number;
    readonly fill?: string;
    readonly fontFamily?: string;
  };
  readonly silent?: boolean;
}
