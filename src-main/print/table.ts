import type { Block, Table } from '@core/protocol/document';
import { type Desk, notesBelow, prose } from './blocks';
import { bodyStyle, type Fit, fitTable, type Group, GUTTER, headStyle } from './fit';
import type { Atom, Frame } from './flow';
import type { Element, Pen } from './pen';
import { ascent, STYLES, type Style } from './sheet';

const RULE = 0.8;
const HAIR = 0.4;
const PAD = 3;
/** A little space after every fifth row leads the eye along. */
const FIVE = 5;

/** A column of a group, placed. */
interface Slot {
  readonly column: number;
  readonly left: number;
  readonly width: number;
  readonly right: boolean;
  /** The first column said again. */
  readonly again: boolean;
}

/** The table in the structure tree: one, however many pages and groups of columns it takes. */
interface Tree {
  readonly table: () => Element;
  readonly head: (column: number) => Element;
  readonly cell: (row: number, column: number) => Element;
}

/** Caption, rows under a head that is repeated on each page, and the note of a table. */
export function tableAtoms(desk: Desk, { table, margin = [] }: Extract<Block, { readonly kind: 'table' }>): Atom[] {
  const { pen, sheet } = desk;
  const fit = fitTable(desk, table);
  const tree = treeOf(pen);
  const width = fit.wide ? sheet.full : sheet.column;
  const caption =
    table.caption === ''
      ? []
      : prose(desk, {
          text: table.caption,
          style: STYLES.caption,
          before: 11,
          x: sheet.left,
          width,
          element: () => pen.element(tree.table(), 'Caption'),
          keep: true,
        });
  const rows = fit.groups.flatMap((group, g) =>
    groupAtoms(desk, { table, fit, group, tree, before: g === 0 ? (caption.length > 0 ? 3 : 11) : 14 }),
  );
  const note = table.note === undefined || table.note === '' ? [] : noteAtoms(desk, table.note, width);
  const below = fit.wide ? notesBelow(desk, margin, width) : [];
  const last = rows.at(-1) as Atom;
  const held = [...rows.slice(0, -1), { ...last, keep: note.length > 0 }];
  const atoms = [...caption, ...held, ...note, ...below];
  if (fit.wide) return atoms.map((atom) => ({ ...atom, wide: true }));
  return atoms.map((atom, i) =>
    i === 0 && margin.length > 0 ? { ...atom, notes: { below: ascent(STYLES.caption), notes: margin } } : atom,
  );
}

function noteAtoms(desk: Desk, text: string, width: number): Atom[] {
  const { pen, sheet } = desk;
  const element = () => pen.element(pen.root, 'P');
  return prose(desk, { text, style: STYLES.note, before: 1, x: sheet.left, width, element });
}

interface GroupOf {
  readonly table: Table;
  readonly fit: Fit;
  readonly group: Group;
  readonly tree: Tree;
  readonly before: number;
}

function groupAtoms(desk: Desk, { table, fit, group, tree, before }: GroupOf): Atom[] {
  const { pen, sheet } = desk;
  const style = bodyStyle(fit.size);
  const slots = slotsOf(group, { table, fit, left: sheet.left, led: group !== fit.groups[0] });
  const frame = frameOf(pen, { table, slots, style: headStyle(fit.size), tree });
  const most = Math.max(3, Math.floor((0.45 * (sheet.bottom - sheet.top)) / style.leading));
  if (table.rows.length === 0) return [{ before, height: 0, keep: false, frame, draw: () => {} }];
  return table.rows.flatMap((row, r) => {
    const cells = slots.map(({ column, width }) => pen.breakText(row[column]?.text ?? '', width, style));
    const lines = Math.max(...cells.map((cell) => cell.length));
    const parts = Math.ceil(lines / most);
    return Array.from({ length: parts }, (_, part): Atom => {
      const from = part * most;
      const to = Math.min(lines, from + most);
      return {
        before:
          part > 0 ? 0 : r === 0 ? before : r % FIVE === 0 && table.rows.length > FIVE + 2 ? 5 : lines > 1 ? 3 : 1,
        height: (to - from) * style.leading,
        keep: part === parts - 1 && table.rows.length > 1 && (r === 0 || r === table.rows.length - 2),
        frame,
        draw: (top) => {
          for (const [s, slot] of slots.entries())
            drawCell(pen, {
              slot,
              lines: (cells[s] as string[]).slice(from, to),
              top,
              style,
              of: () => tree.cell(r, slot.column),
            });
        },
      };
    });
  });
}

function slotsOf(
  { columns, widths }: Group,
  { table, fit, left, led }: { table: Table; fit: Fit; left: number; led: boolean },
): Slot[] {
  let at = left;
  return columns.map((column, i) => {
    const width = widths[i] as number;
    const slot = { column, left: at, width, right: table.head[column]?.align === 'right', again: led && i === 0 };
    at += width + GUTTER * fit.size;
    return slot;
  });
}

interface CellOf {
  readonly slot: Slot;
  readonly lines: readonly string[];
  readonly top: number;
  readonly style: Style;
  readonly of: () => Element;
}

function drawCell(pen: Pen, { slot, lines, top, style, of }: CellOf): void {
  const draw = () => {
    for (const [i, text] of lines.entries()) {
      const baseline = top + i * style.leading + ascent(style);
      if (text !== '')
        pen.write({
          text,
          style,
          baseline,
          x: slot.right ? slot.left + slot.width : slot.left,
          at: slot.right ? 'end' : 'start',
        });
    }
  };
  if (slot.again) {
    pen.apart('Layout', draw);
    return;
  }
  const element = of();
  if (lines.some((text) => text !== '')) pen.within(element, draw);
}

function frameOf(
  pen: Pen,
  { table, slots, style, tree }: { table: Table; slots: readonly Slot[]; style: Style; tree: Tree },
): Frame {
  const heads = slots.map(({ column, width }) => pen.breakText(table.head[column]?.text ?? '', width, style));
  const lines = Math.max(...heads.map((head) => head.length));
  const left = (slots[0] as Slot).left;
  const end = slots.at(-1) as Slot;
  const right = end.left + end.width;
  const under = PAD + lines * style.leading + PAD - 1;
  return {
    head: under + PAD - 0.5,
    foot: PAD + 4,
    open: (top, again) => {
      pen.rule(left, right, top + RULE / 2, RULE);
      for (const [s, slot] of slots.entries()) {
        const text = heads[s] as string[];
        // Short heads stand on the line of the longest.
        const start = top + PAD + (lines - text.length) * style.leading;
        drawCell(pen, {
          slot: again ? { ...slot, again } : slot,
          lines: text,
          top: start,
          style,
          of: () => tree.head(slot.column),
        });
      }
      pen.rule(left, right, top + under, HAIR);
    },
    close: (bottom) => pen.rule(left, right, bottom + PAD, RULE),
  };
}

function treeOf(pen: Pen): Tree {
  let table: Element | undefined;
  let headRow: Element | undefined;
  let body: Element | undefined;
  const rows = new Map<number, Element>();
  const cells = new Map<string, Element>();
  const tableOf = () => (table ??= pen.element(pen.root, 'Table'));
  const rowOf = (row: number) => {
    body ??= pen.element(tableOf(), 'TBody');
    const known = rows.get(row);
    if (known !== undefined) return known;
    const made = pen.element(body, 'TR');
    rows.set(row, made);
    return made;
  };
  return {
    table: tableOf,
    head: () => {
      headRow ??= pen.element(pen.element(tableOf(), 'THead'), 'TR');
      return pen.element(headRow, 'TH', { scope: 'Column' });
    },
    cell: (row, column) => {
      const key = `${row} ${column}`;
      const known = cells.get(key);
      if (known !== undefined) return known;
      const made = column === 0 ? pen.element(rowOf(row), 'TH', { scope: 'Row' }) : pen.element(rowOf(row), 'TD');
      cells.set(key, made);
      return made;
    },
  };
}
