import { expect, it } from 'vitest';
import { refusedOrWhole, runOn, type Said, type Structured, searchRefusals, structures } from './hostile';

/** Columns x, y, n, se of one table. */
export interface Table {
  readonly name: string;
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly n: readonly number[];
  readonly se: readonly number[];
  /** True where every method has its own way to fail. */
  readonly everyMethod?: boolean;
}

const count = (length: number) => Array.from({ length }, (_, g) => g);
const wobble = (g: number) => Math.sin(12.9898 * (g + 1)) * 0.7;

/** Nine cells around a line, in other units or with other errors. */
export function nine(name: string, change: { y?: number; x?: number; se?: (g: number) => number }): Table {
  const { y: unit = 1, x: step = 1, se = (g) => unit * (1 + g / 9) } = change;
  return {
    name,
    x: count(9).map((g) => step * g),
    y: count(9).map((g) => unit * (g + wobble(g))),
    n: count(9).map((g) => 5 + g),
    se: count(9).map(se),
  };
}

export const tables: readonly Table[] = [
  { name: 'as many cells as terms', x: [1, 2], y: [1, 3], n: [10, 20], se: [0.1, 0.2], everyMethod: true },
  { name: 'one residual', x: [1, 2, 4], y: [1, 3, 2], n: [10, 20, 5], se: [0.1, 0.2, 0.3], everyMethod: true },
  {
    name: 'two residuals',
    x: [1, 2, 4, 5],
    y: [1, 3, 2, 4],
    n: [10, 20, 5, 7],
    se: [0.1, 0.2, 0.3, 0.2],
    everyMethod: true,
  },
  {
    name: 'a perfect line',
    everyMethod: true,
    x: count(8),
    y: count(8).map((g) => 2 + 3 * g),
    n: count(8).map((g) => g + 1),
    se: count(8).map(() => 0.5),
  },
  {
    name: 'a line to the eleventh digit',
    x: count(8),
    y: count(8).map((g) => 2 + 3 * g + 1e-11 * wobble(g)),
    n: count(8).map((g) => g + 1),
    se: count(8).map((g) => 0.5 + g / 10),
  },
  {
    name: 'equal outcomes',
    everyMethod: true,
    x: count(8),
    y: count(8).map(() => 4),
    n: count(8).map((g) => g + 1),
    se: count(8).map(() => 0.5),
  },
  {
    name: 'outcomes of 0',
    x: count(8),
    y: count(8).map(() => 0),
    n: count(8).map((g) => g + 1),
    se: count(8).map(() => 0.5),
  },
  {
    name: 'a line but for one cell',
    x: count(9),
    y: count(9).map((g) => (g === 8 ? 9 : g)),
    n: count(9).map((g) => 5 + g),
    se: count(9).map((g) => 0.4 + g / 30),
  },
  {
    name: 'equal sizes',
    x: count(9),
    y: count(9).map((g) => g + wobble(g)),
    n: count(9).map(() => 30),
    se: count(9).map(() => 0.5),
  },
  {
    name: 'sizes over twelve orders',
    x: count(13),
    y: count(13).map((g) => g + wobble(g)),
    n: count(13).map((g) => 10 ** g),
    se: count(13).map((g) => 10 ** (-g / 2)),
  },
  nine('outcomes near 1e-60', { y: 1e-60 }),
  nine('outcomes near 1e60', { y: 1e60 }),
  nine('outcomes near 1e-145', { y: 1e-145 }),
  nine('outcomes near 1e145', { y: 1e145 }),
  nine('errors near 1e-150', { se: (g) => 1e-150 * (1 + g / 9) }),
  nine('errors near 1e150', { se: (g) => 1e150 * (1 + g / 9) }),
  nine('a covariate near 1e-300', { x: 1e-300 }),
  nine('a covariate near 1e300', { x: 1e300 }),
  nine('errors far too large', { se: (g) => 50 + g }),
  nine('errors far too small', { se: (g) => 1e-6 * (1 + g / 9) }),
  nine('one error far too small', { se: (g) => (g === 4 ? 1e-9 : 0.5) }),
  {
    name: 'a covariate far from zero',
    x: count(9).map((g) => 1e8 + g),
    y: count(9).map((g) => g + wobble(g)),
    n: count(9).map((g) => 5 + 3 * g),
    se: count(9).map(() => 0.4),
  },
  {
    name: 'outcomes far from zero',
    x: count(9),
    y: count(9).map((g) => 1e12 + g + wobble(g)),
    n: count(9).map((g) => 5 + 3 * g),
    se: count(9).map((g) => 0.4 + g / 20),
  },
  {
    name: 'one cell alone at a covariate',
    everyMethod: true,
    x: [0, 0, 0, 0, 0, 1],
    y: [1, 2, 1.5, 1.7, 1.2, 9],
    n: [5, 6, 7, 8, 9, 4],
    se: [0.3, 0.2, 0.4, 0.3, 0.2, 0.5],
  },
  {
    name: 'one outlier',
    everyMethod: true,
    x: count(12),
    y: count(12).map((g) => (g === 5 ? 1e6 : g + wobble(g))),
    n: count(12).map((g) => 5 + g),
    se: count(12).map((g) => 0.4 + g / 30),
  },
];

const said: Said = {
  roles: { label: ['block', 'label'], outcome: 'y', size: 'n', error: 'se' },
  terms: [{ column: 'x' }],
  beside: ['constant', 'per-size', 'given'],
  matters: { x: 0.1 },
  questions: [
    { kind: 'joint', terms: ['intercept', 'x'], family: 'a' },
    { kind: 'combination', of: { x: 2 }, equals: 1, family: 'a' },
    { kind: 'expect', where: { x: 1 }, size: 10, error: 1 },
    { kind: 'average', of: [{ where: { x: 1 }, share: 1 }], minus: [{ where: { x: 0 }, share: 1 }] },
  ],
};

export function run({ x, y, n, se }: Table, parts: Structured['parts'], more: Said = {}) {
  const columns = { label: x.map((_, g) => `cell ${g}`), block: x.map((_, g) => g % 3), x, y, n, se };
  return runOn(columns, { ...said, variance: { parts }, ...more });
}

export const found = (name: string) => tables.find((table) => table.name === name) as Table;
export const partsOf = (name: string) => (structures.find((one) => one.name === name) as Structured).parts;

/** Every structure with its methods on some tables: the first half stands in one test file, the second in another, so that they run side by side. */
export function everyTable(some: readonly Table[]): void {
  for (const table of some)
    it.each(structures)(
      `${table.name}, $name: an answer without a hole, or a refusal by name`,
      ({ parts, methods }) => {
        for (const estimate of methods)
          for (const code of refusedOrWhole(run(table, parts, estimate ? { estimate } : {})))
            expect(searchRefusals).toContain(code);
      },
    );
}
