import type { Figure } from './figure';
import type { Table } from './page-table';

export type { Cell, ColumnHead, Table } from './page-table';

/** A report as plain data: print/ and screens lay it out, and add no word and no number to it. */
export interface ReportDocument {
  readonly language: 'en';
  readonly title: string;
  readonly subject: string;
  readonly author: string | null;
  readonly paper: 'A4' | 'Letter';
  /** Left and right of the page foot; print sets the page number of pages between them, by the pattern pageOf: "page {n} of {m}". */
  readonly foot: { readonly left: string; readonly right: string; readonly pageOf?: string };
  readonly blocks: readonly Block[];
}

export type Block =
  | {
      readonly kind: 'heading';
      readonly level: 1 | 2 | 3;
      readonly text: string;
      readonly margin?: readonly MarginNote[];
    }
  | {
      readonly kind: 'paragraph';
      readonly role: 'lead' | 'plain' | 'small';
      readonly text: string;
      readonly margin?: readonly MarginNote[];
    }
  /** A finding with its consequence and what to do. */
  | { readonly kind: 'caution'; readonly group: string; readonly text: string; readonly margin?: readonly MarginNote[] }
  | { readonly kind: 'list'; readonly items: readonly string[]; readonly margin?: readonly MarginNote[] }
  /** Mathematics in Unicode text, set in the mathematical face; spoken: the same in words, for readers who hear it. */
  | {
      readonly kind: 'equation';
      readonly text: string;
      readonly spoken: string;
      readonly margin?: readonly MarginNote[];
    }
  | { readonly kind: 'table'; readonly table: Table; readonly margin?: readonly MarginNote[] }
  | { readonly kind: 'figure'; readonly figure: Figure; readonly margin?: readonly MarginNote[] }
  | { readonly kind: 'page-break' };

/** Stands in the margin beside its block: a definition, or a source. */
export interface MarginNote {
  readonly about: string;
  readonly text: string;
}
