import { fromPairs, pairAt } from '../numbers/decimals';
import type { Pair } from '../numbers/double-double';
import type { Status } from '../protocol/plan';
import type { Column, Gap, Numbers, Undefined } from './column';

/** One value that a derived value is made of; row -1: there is no such row. */
export interface Ingredient {
  readonly column: Column;
  readonly numbers: Numbers;
  readonly row: number;
}

/** How one derived value comes about. */
export interface Combined {
  readonly of: readonly Ingredient[];
  /** null: missing. */
  readonly value: (values: readonly Pair[]) => Pair | null;
  /** What is to blame where the value is undefined: the last ingredient, at this place of the plan. */
  readonly blame?: { readonly at: string; readonly transform: string };
  /** Whose gap is told where the value is missing though no ingredient is. */
  readonly lacking?: Ingredient;
  /** Something undefined that is no ingredient of its own: a member of a group whose mean is asked for. */
  readonly cause?: Undefined | null;
}

type DerivedNumbers = Numbers & { readonly gapTexts: ReadonlyMap<number, string> };

const remarks: ReadonlySet<Status> = new Set(['provisional', 'estimated', 'low-reliability']);

/**
 * Forms the values of a derived column row by row.
 *
 * A gap of an ingredient is handed on with its text, an undefined ingredient with its cause; a row that is not there gives `missing`, text "".
 * A value that is provisional, estimated or of low reliability makes what is derived from it so.
 */
export function combine(rows: number, how: (row: number) => Combined, file: string): DerivedNumbers {
  const values: (Pair | null)[] = [];
  const status: Status[] = [];
  const gaps: (Gap | null)[] = [];
  const gapTexts = new Map<number, string>();
  const undefinedAt = new Map<number, Undefined>();
  for (let row = 0; row < rows; row++) {
    const combined = how(row);
    const gap = gapAmong(combined.of);
    const inherited = gap ? null : (inheritedCause(combined.of) ?? combined.cause ?? null);
    const value =
      gap || inherited ? null : combined.value(combined.of.map((one) => pairAt(one.numbers.values, one.row)));
    const lack =
      gap ?? (value === null && !inherited ? (gapAmong(combined.lacking ? [combined.lacking] : []) ?? nothing) : null);
    gaps.push(lack?.gap ?? null);
    if (lack) gapTexts.set(row, lack.text);
    const cause = inherited ?? causeOf(value, combined, file);
    if (cause) undefinedAt.set(row, cause);
    values.push(cause ? null : value);
    status.push(lack ? 'blank' : statusAmong(combined.of));
  }
  return { values: fromPairs(values), status, gaps, wrong: [], ends: new Map(), undefinedAt, gapTexts };
}

interface Lack {
  readonly gap: Gap;
  readonly text: string;
}

const nothing: Lack = { gap: 'missing', text: '' };

function gapAmong(ingredients: readonly Ingredient[]): Lack | null {
  for (const { column, numbers, row } of ingredients) {
    if (row < 0) return nothing;
    const gap = numbers.gaps[row];
    if (gap) return { gap, text: column.gapText(row) };
    // A text that is no number is told where the plan needs it; in a row that omit takes out it is no fault, and no value either.
    if (Number.isNaN(numbers.values.high[row]) && !numbers.undefinedAt.has(row))
      return { gap: 'missing', text: column.texts[row] ?? '' };
  }
  return null;
}

function inheritedCause(ingredients: readonly Ingredient[]): Undefined | null {
  for (const { numbers, row } of ingredients) {
    const cause = numbers.undefinedAt.get(row);
    if (cause) return cause;
  }
  return null;
}

/** A value that was asked for and cannot be formed. */
function causeOf(value: Pair | null, { of, blame }: Combined, file: string): Undefined | null {
  const last = of.at(-1);
  if (value === null || Number.isFinite(value[0]) || !blame || !last) return null;
  const { column, row } = last;
  return { ...blame, file, row: row + 1, column: column.name, found: column.texts[row] ?? '' };
}

function statusAmong(ingredients: readonly Ingredient[]): Status {
  const found = ingredients
    .map(({ numbers, row }) => numbers.status[row] ?? 'value')
    .find((status) => remarks.has(status));
  return found ?? 'value';
}

/** A derived column: its texts are the shortest that read back to its values as doubles, "" where there is none. */
export function derivedColumn(of: {
  readonly name: string;
  readonly file: string;
  readonly numbers: () => DerivedNumbers;
}): Column {
  const { name, file, numbers } = of;
  let texts: readonly string[] | null = null;
  return {
    name,
    file,
    fileAt: '/data/file',
    derived: true,
    get texts() {
      texts ??= Array.from(numbers().values.high, (value) => (Number.isNaN(value) ? '' : String(value)));
      return texts;
    },
    rowInFile: (row) => row + 1,
    readsBothWays: null,
    numbers,
    categoryGaps: () => numbers().gaps,
    gapText: (row) => numbers().gapTexts.get(row) ?? '',
  };
}
