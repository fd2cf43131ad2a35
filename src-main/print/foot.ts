import type { ReportDocument } from '@core/protocol/document';
import type { Pen } from './pen';
import { ascent, STYLES, sheetOf } from './sheet';

/** Shares of the page foot: words left and right, the page number between them. */
const SIDE = 0.38;

interface Foot {
  readonly left: readonly string[];
  readonly right: readonly string[];
}

/** How many lines the page foot takes: at least one. */
export function footLines(pen: Pen, document: ReportDocument): number {
  const { left, right } = footOf(pen, document);
  return Math.max(left.length, right.length);
}

/** Draws the foot of each of the pages, once their number is known; a foot is no content and is not read aloud. */
export function drawFeet(pen: Pen, document: ReportDocument, pages: number): void {
  const style = STYLES.foot;
  const { left, right } = footOf(pen, document);
  const sheet = sheetOf(document.paper, Math.max(left.length, right.length));
  const end = sheet.left + sheet.full;
  const first = sheet.bottom + 16 + ascent(style);
  for (let page = 0; page < pages; page++) {
    pen.pdf.switchToPage(page);
    pen.apart('Pagination', () => {
      for (const [i, text] of left.entries())
        pen.write({ text, style, x: sheet.left, baseline: first + i * style.leading });
      const number = pageNumber(document, page + 1, pages);
      pen.write({ text: number, style, x: sheet.left + sheet.full / 2, baseline: first, at: 'middle' });
      for (const [i, text] of right.entries())
        pen.write({ text, style, x: end, baseline: first + i * style.leading, at: 'end' });
    });
  }
}

function pageNumber({ foot }: ReportDocument, page: number, pages: number): string {
  const pattern = foot.pageOf ?? '{n} / {m}';
  return pattern.replace('{n}', `${page}`).replace('{m}', `${pages}`);
}

function footOf(pen: Pen, { foot, paper }: ReportDocument): Foot {
  const width = SIDE * sheetOf(paper, 1).full;
  return { left: pen.breakText(foot.left, width, STYLES.foot), right: pen.breakText(foot.right, width, STYLES.foot) };
}
