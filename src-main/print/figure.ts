import type { Block } from '@core/protocol/document';
import type draw from 'svg-to-pdfkit';
import { type Desk, notesBelow, prose } from './blocks';
import type { Atom } from './flow';
import type { Element } from './pen';
import { partTexts, writeText } from './picture-text';
import { ascent, STYLES } from './sheet';

/** A figure drawn, with the program that puts it on a page. */
export interface Drawn {
  readonly svg: string;
  readonly draw: typeof draw;
}

type FigureBlock = Extract<Block, { readonly kind: 'figure' }>;

const BEFORE = 11;
const CAPTION_GAP = 4;
/** A figure this little wider than the column is shrunk to it. */
const NEARLY = 1.06;

/** A figure and the caption under it, kept on one page; over the margin where it is wider than the column, and shrunk where it is wider than both. */
export function figureAtoms(desk: Desk, { figure, margin = [] }: FigureBlock, drawn: Drawn): Atom[] {
  const { pen, sheet } = desk;
  const wide = figure.width > NEARLY * sheet.column;
  const measure = wide ? sheet.full : sheet.column;
  const { shapes, texts } = partTexts(drawn.svg);
  let whole: Element | undefined;
  const wholeOf = () => (whole ??= pen.element(pen.root, 'Div'));
  const caption =
    figure.caption === ''
      ? []
      : prose(desk, {
          text: figure.caption,
          style: STYLES.caption,
          before: CAPTION_GAP,
          x: sheet.left,
          width: measure,
          element: () => pen.element(wholeOf(), 'Caption'),
          keep: true,
        });
  const below = wide ? notesBelow(desk, margin, measure) : [];
  const room = sheet.bottom - sheet.top - heightOf([...caption, ...below]);
  const scale = Math.min(1, measure / figure.width, room / figure.height);
  const [width, height] = [scale * figure.width, scale * figure.height];
  const picture: Atom = {
    before: BEFORE,
    height,
    keep: caption.length > 0,
    ...(wide || margin.length === 0 ? {} : { notes: { below: ascent(STYLES.note), notes: margin } }),
    draw: (top) => {
      const x = sheet.left;
      const element = pen.element(wholeOf(), 'Figure', { alt: figure.alt, bbox: [x, top, x + width, top + height] });
      pen.within(element, () =>
        drawn.draw(pen.pdf, shapes, x, top, {
          width,
          height,
          assumePt: true,
          preserveAspectRatio: 'xMinYMin meet',
          warningCallback: (warning) => {
            throw new Error(`figure ${figure.id}: ${warning}`);
          },
        }),
      );
      for (const text of texts) pen.within(element, () => writeText(pen, text, { x, top, scale }));
    },
  };
  const captions = caption.map((atom, i) => ({ ...atom, keep: i < caption.length - 1 }));
  const atoms = [picture, ...captions, ...below];
  return wide ? atoms.map((atom) => ({ ...atom, wide })) : atoms;
}

function heightOf(atoms: readonly Atom[]): number {
  return atoms.reduce((sum, { before, height }) => sum + before + height, 0);
}
