import type { ReportDocument } from '@core/protocol/document';
import type { Face } from './faces';

/** Places on a page, in points from its top left corner. */
export interface Sheet {
  readonly width: number;
  readonly height: number;
  readonly top: number;
  /** Where the body ends; the foot lies below. */
  readonly bottom: number;
  readonly left: number;
  /** Width of the text column. */
  readonly column: number;
  readonly marginLeft: number;
  readonly marginWidth: number;
  /** Column, gap and margin together. */
  readonly full: number;
}

/** How a line is set. Sizes and leading in points. */
export interface Style {
  readonly face: Face;
  readonly size: number;
  readonly leading: number;
  readonly ink: string;
}

export const INK = '#1e1c19';
/** The same ink, thinned: notes and page foot. */
export const PALE = '#57534c';
export const ACCENT = '#8c2f1b';

const style = (face: Face, size: number, leading: number, ink = INK): Style => ({ face, size, leading, ink });

export const STYLES = {
  heading1: style('strong', 16.5, 21),
  heading2: style('strong', 11.5, 15.5),
  heading3: style('plain-strong', 8.8, 12.5),
  lead: style('text', 10.6, 15.8),
  plain: style('text', 8.9, 13),
  small: style('text', 7.4, 10.6),
  equation: style('text', 10.2, 16),
  label: style('plain-strong', 7.4, 11, ACCENT),
  caption: style('plain-strong', 7.8, 11),
  note: style('plain', 6.8, 9.2, PALE),
  noteAbout: style('plain-strong', 6.8, 9.2),
  foot: style('plain', 6.6, 9, PALE),
} as const satisfies Record<string, Style>;

const PAPERS = {
  A4: { width: 595.28, height: 841.89, left: 52, column: 338, marginLeft: 412, marginWidth: 139.28 },
  Letter: { width: 612, height: 792, left: 54, column: 348, marginLeft: 424, marginWidth: 140 },
};

const TOP = 54;
/** From the last line of the foot to the edge of the paper. */
const FOOT_EDGE = 30;
const FOOT_GAP = 16;

/** The page of a paper whose foot takes footLines lines. */
export function sheetOf(paper: ReportDocument['paper'], footLines: number): Sheet {
  const { width, height, left, column, marginLeft, marginWidth } = PAPERS[paper];
  const bottom = height - FOOT_EDGE - footLines * STYLES.foot.leading - FOOT_GAP;
  return {
    width,
    height,
    top: TOP,
    bottom,
    left,
    column,
    marginLeft,
    marginWidth,
    full: marginLeft + marginWidth - left,
  };
}

/** From the top of a line to its baseline: capitals stand in the middle of the leading. */
export function ascent({ size, leading }: Style): number {
  return (leading + 0.71 * size) / 2;
}
