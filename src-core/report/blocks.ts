import type { Block, Cell, ColumnHead, MarginNote, Table } from '../protocol/document';
import type { Figure } from '../protocol/figure';
import { type Digits, number } from '../words/numbers';
import { typeset } from '../words/typeset';

export function heading(level: 1 | 2 | 3, text: string): Block {
  return { kind: 'heading', level, text };
}

/** A paragraph; nothing for text that is null or empty. */
export function paragraph(
  text: string | null,
  margin?: readonly MarginNote[],
  role: 'lead' | 'plain' | 'small' = 'plain',
): Block[] {
  if (text === null || text === '') return [];
  return [{ kind: 'paragraph', role, text: typeset(text), ...(margin === undefined ? {} : { margin }) }];
}

/** Sentences of one paragraph, those that are null left out. */
export function sentences(...parts: readonly (string | null)[]): string {
  return parts.filter((part) => part !== null && part !== '').join(' ');
}

export function list(items: readonly string[], margin?: readonly MarginNote[]): Block[] {
  return items.length === 0
    ? []
    : [{ kind: 'list', items: items.map(typeset), ...(margin === undefined ? {} : { margin }) }];
}

/** A table; nothing without rows. */
export function table(of: Table, margin?: readonly MarginNote[]): Block[] {
  return of.rows.length === 0 ? [] : [{ kind: 'table', table: of, ...(margin === undefined ? {} : { margin }) }];
}

export function figure(of: Figure | null, margin?: readonly MarginNote[]): Block[] {
  return of === null ? [] : [{ kind: 'figure', figure: of, ...(margin === undefined ? {} : { margin }) }];
}

export function left(text: string, breadth = 1): ColumnHead {
  return { text, align: 'left', breadth };
}

export function right(text: string): ColumnHead {
  return { text, align: 'right' };
}

/** A cell of text alone. */
export function words(text: string): Cell {
  return { value: null, text: typeset(text) };
}

/** A value with its text. */
export function valued(value: Cell['value'], text: string): Cell {
  return { value, text: typeset(text) };
}

/** A number, formatted. */
export function num(value: number | null, as: Digits = {}): Cell {
  return { value, text: typeset(number(value, as)) };
}

/** Text that stands on one line in any case. */
export function unbroken(value: Cell['value'], text: string): Cell {
  return { value, text: text.replaceAll(' ', '\u00a0') };
}
