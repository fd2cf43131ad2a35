import type { Block, ReportDocument } from '@core/protocol/document';
import type { Figure } from '@core/protocol/figure';
import { cautionAtoms, type Desk, equationAtoms, headingAtoms, listAtoms, paragraphAtoms } from './blocks';
import { type Drawn, figureAtoms } from './figure';
import { type Atom, openFlow } from './flow';
import { drawFeet, footLines } from './foot';
import { bytesOf, openReport, type PrintOptions } from './pdf';
import { openPen } from './pen';
import { figureSvg } from './picture';
import { sheetOf } from './sheet';
import { tableAtoms } from './table';

/**
 * Prints a report: one text column with its notes in a wide margin, as a tagged PDF 1.7 with embedded fonts.
 *
 * It adds no word and no number to the document but those of the pages. The same document, date and version give the same bytes on any machine: nothing is compressed, and the
 * file's identifier is made from title, subject, author, version and date.
 *
 * date: ISO 8601, the only date in the file. progress: hears after each part which share of them is set.
 * A missing caption, note or author takes no room.
 */
export async function printReport(
  document: ReportDocument,
  options: PrintOptions,
  progress: (share: number) => void = () => {},
): Promise<Uint8Array> {
  const [pdf, drawn] = await Promise.all([openReport(document, options), drawFigures(document.blocks)]);
  const pen = openPen(pdf);
  const sheet = sheetOf(document.paper, footLines(pen, document));
  const desk = { pen, sheet };
  const flow = openFlow(pen, sheet);
  const parts = partsOf(document.blocks);
  for (const [i, part] of parts.entries()) {
    flow.breakPage();
    flow.place(part.flatMap((block, at) => atomsOf(desk, block, { before: part[at - 1], drawn })));
    progress((i + 1) / parts.length);
  }
  drawFeet(pen, document, flow.finish());
  return bytesOf(pdf);
}

interface Around {
  readonly before: Block | undefined;
  readonly drawn: ReadonlyMap<Figure, Drawn>;
}

function atomsOf(desk: Desk, block: Block, { before, drawn }: Around): Atom[] {
  switch (block.kind) {
    case 'heading':
      return headingAtoms(desk, block);
    case 'paragraph':
      return paragraphAtoms(desk, block);
    case 'caution':
      return cautionAtoms(desk, block, before);
    case 'list':
      return listAtoms(desk, block);
    case 'equation':
      return equationAtoms(desk, block);
    case 'table':
      return tableAtoms(desk, block);
    case 'figure':
      return figureAtoms(desk, block, drawn.get(block.figure) as Drawn);
    case 'page-break':
      return [];
  }
}

/** The blocks between page breaks. */
function partsOf(blocks: readonly Block[]): Block[][] {
  const parts: Block[][] = [[]];
  for (const block of blocks)
    if (block.kind === 'page-break') parts.push([]);
    else parts.at(-1)?.push(block);
  return parts.filter((part) => part.length > 0);
}

async function drawFigures(blocks: readonly Block[]): Promise<Map<Figure, Drawn>> {
  const figures = blocks.flatMap((block) => (block.kind === 'figure' ? [block.figure] : []));
  if (figures.length === 0) return new Map();
  const draw = (await import('svg-to-pdfkit')).default;
  const drawn = new Map<Figure, Drawn>();
  for (const figure of figures) drawn.set(figure, { svg: await figureSvg(figure), draw });
  return drawn;
}
