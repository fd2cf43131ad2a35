import type { Block, MarginNote } from '@core/protocol/document';
import type { Atom } from './flow';
import type { Element, Pen } from './pen';
import { ascent, type Sheet, STYLES, type Style } from './sheet';

export interface Desk {
  readonly pen: Pen;
  readonly sheet: Sheet;
}

interface Prose {
  readonly text: string;
  readonly style: Style;
  readonly before: number;
  readonly x: number;
  readonly width: number;
  /** How far lines after the first stand in. */
  readonly hang?: number;
  readonly element: () => Element;
  readonly notes?: readonly MarginNote[] | undefined;
  /** All lines stay on the page of what follows. */
  readonly keep?: boolean;
  /** Done with the first line: what stands beside it. */
  readonly beside?: (baseline: number) => void;
}

type Kind<K extends Block['kind']> = Extract<Block, { readonly kind: K }>;

const SPACE = {
  heading: [22, 17, 12],
  lead: 9,
  plain: 6.5,
  small: 5,
  list: 6.5,
  item: 2.5,
  caution: 8,
  equation: 8,
} as const;
const EQUATION_INDENT = 16;
const LIST_INDENT = 12;

/** Lines of text as atoms: the first two stay together, and the last two. */
export function prose({ pen }: Desk, { element, ...of }: Prose): Atom[] {
  const { style, hang = 0, x, width, keep = false } = of;
  const lines = pen.breakText(of.text, width, style, width - hang);
  let own: Element | undefined;
  return lines.map((text, i) => ({
    before: i === 0 ? of.before : 0,
    height: style.leading,
    keep: keep || (lines.length > 1 && (i === 0 || i === lines.length - 2)),
    ...(i === 0 && of.notes !== undefined ? { notes: { below: ascent(style), notes: of.notes } } : {}),
    draw: (top) => {
      const baseline = top + ascent(style);
      if (i === 0) of.beside?.(baseline);
      own ??= element();
      pen.within(own, () => pen.write({ text, style, x: x + (i === 0 ? 0 : hang), baseline }));
    },
  }));
}

export function headingAtoms(desk: Desk, { level, text, margin }: Kind<'heading'>): Atom[] {
  const { pen, sheet } = desk;
  const style = [STYLES.heading1, STYLES.heading2, STYLES.heading3][level - 1] as Style;
  return prose(desk, {
    text,
    style,
    before: SPACE.heading[level - 1] as number,
    x: sheet.left,
    width: sheet.column,
    element: () => pen.element(pen.root, `H${level}`),
    notes: margin,
    keep: true,
    beside: (baseline) => pen.bookmark(text, level, baseline - style.leading),
  });
}

export function paragraphAtoms(desk: Desk, { role, text, margin }: Kind<'paragraph'>): Atom[] {
  const { pen, sheet } = desk;
  return prose(desk, {
    text,
    style: STYLES[role],
    before: SPACE[role],
    x: sheet.left,
    width: sheet.column,
    element: () => pen.element(pen.root, 'P'),
    notes: margin,
  });
}

/** A caution under its group; the group is not said again where the caution before had it. */
export function cautionAtoms(desk: Desk, { group, text, margin }: Kind<'caution'>, before: Block | undefined): Atom[] {
  const { pen, sheet } = desk;
  const same = before?.kind === 'caution' && before.group === group;
  const place = { x: sheet.left, width: sheet.column };
  const element = () => pen.element(pen.root, 'P');
  const body: Prose = { ...place, text, style: STYLES.plain, before: same ? SPACE.small : 1, element };
  if (same) return prose(desk, { ...body, notes: margin });
  const label = prose(desk, {
    ...place,
    text: group,
    style: STYLES.label,
    before: SPACE.caution,
    element,
    notes: margin,
    keep: true,
  });
  return [...label, ...prose(desk, body)];
}

export function listAtoms(desk: Desk, { items, margin }: Kind<'list'>): Atom[] {
  const { pen, sheet } = desk;
  const style = STYLES.plain;
  let list: Element | undefined;
  return items.flatMap((text, i) => {
    let item: Element | undefined;
    const itemOf = () => {
      list ??= pen.element(pen.root, 'L');
      item ??= pen.element(list, 'LI');
      return item;
    };
    return prose(desk, {
      text,
      style,
      before: i === 0 ? SPACE.list : SPACE.item,
      x: sheet.left + LIST_INDENT,
      width: sheet.column - LIST_INDENT,
      element: () => pen.element(itemOf(), 'LBody'),
      notes: i === 0 ? margin : undefined,
      beside: (baseline) =>
        pen.within(pen.element(itemOf(), 'Lbl'), () => pen.write({ text: '•', style, x: sheet.left + 2, baseline })),
    });
  });
}

export function equationAtoms(desk: Desk, { text, spoken, margin }: Kind<'equation'>): Atom[] {
  const { pen, sheet } = desk;
  const atoms = prose(desk, {
    text,
    style: STYLES.equation,
    before: SPACE.equation,
    x: sheet.left + EQUATION_INDENT,
    width: sheet.column - EQUATION_INDENT,
    hang: EQUATION_INDENT,
    element: () => pen.element(pen.root, 'Formula', { alt: spoken }),
    notes: margin,
  });
  return atoms.map((atom, i) => ({ ...atom, keep: i < atoms.length - 1 }));
}

/** Notes for which the margin has no room: small, under their block. */
export function notesBelow(desk: Desk, notes: readonly MarginNote[], width: number): Atom[] {
  const { pen, sheet } = desk;
  return notes.flatMap(({ about, text }) => {
    let note: Element | undefined;
    const element = () => (note ??= pen.element(pen.root, 'Note'));
    const place = { x: sheet.left, width, element };
    return [
      ...(about === '' ? [] : prose(desk, { ...place, text: about, style: STYLES.noteAbout, before: 4, keep: true })),
      ...prose(desk, { ...place, text, style: STYLES.note, before: about === '' ? 4 : 0 }),
    ];
  });
}
