import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import { validateResult } from '@core/protocol/validate-result';
import { runText } from '@main/engine/run-plan';
import { describe, expect, it } from 'vitest';

type Parts = Plan['variance']['parts'] | readonly object[];

/** Columns x, y, n, se of one table; every combination of structure and method that fits it is tried. */
interface Table {
  readonly name: string;
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly n: readonly number[];
  readonly se: readonly number[];
}

const count = (length: number) => Array.from({ length }, (_, g) => g);
const wobble = (g: number) => Math.sin(12.9898 * (g + 1)) * 0.7;

const tables: readonly Table[] = [
  { name: 'as many cells as terms', x: [1, 2], y: [1, 3], n: [10, 20], se: [0.1, 0.2] },
  { name: 'one residual', x: [1, 2, 4], y: [1, 3, 2], n: [10, 20, 5], se: [0.1, 0.2, 0.3] },
  { name: 'two residuals', x: [1, 2, 4, 5], y: [1, 3, 2, 4], n: [10, 20, 5, 7], se: [0.1, 0.2, 0.3, 0.2] },
  {
    name: 'a perfect line',
    x: count(8),
    y: count(8).map((g) => 2 + 3 * g),
    n: count(8).map((g) => g + 1),
    se: count(8).map(() => 0.5),
  },
  {
    name: 'equal outcomes',
    x: count(8),
    y: count(8).map(() => 4),
    n: count(8).map((g) => g + 1),
    se: count(8).map(() => 0.5),
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
  {
    name: 'tiny outcomes',
    x: count(9),
    y: count(9).map((g) => 1e-60 * (g + wobble(g))),
    n: count(9).map((g) => 5 + g),
    se: count(9).map(() => 1e-60),
  },
  {
    name: 'huge outcomes',
    x: count(9),
    y: count(9).map((g) => 1e60 * (g + wobble(g))),
    n: count(9).map((g) => 5 + g),
    se: count(9).map(() => 1e60),
  },
  {
    name: 'a covariate far from zero',
    x: count(9).map((g) => 1e8 + g),
    y: count(9).map((g) => g + wobble(g)),
    n: count(9).map((g) => 5 + 3 * g),
    se: count(9).map(() => 0.4),
  },
  {
    name: 'one cell alone at a covariate',
    x: [0, 0, 0, 0, 0, 1],
    y: [1, 2, 1.5, 1.7, 1.2, 9],
    n: [5, 6, 7, 8, 9, 4],
    se: [0.3, 0.2, 0.4, 0.3, 0.2, 0.5],
  },
  {
    name: 'errors far too large',
    x: count(9),
    y: count(9).map((g) => g + 0.01 * wobble(g)),
    n: count(9).map((g) => 5 + g),
    se: count(9).map(() => 50),
  },
  {
    name: 'errors far too small',
    x: count(9),
    y: count(9).map((g) => g + wobble(g)),
    n: count(9).map((g) => 5 + g),
    se: count(9).map(() => 1e-6),
  },
  {
    name: 'one outlier',
    x: count(12),
    y: count(12).map((g) => (g === 5 ? 1e6 : g + wobble(g))),
    n: count(12).map((g) => 5 + g),
    se: count(12).map(() => 0.4),
  },
];

const structures: readonly [string, Parts][] = [
  ['constant', [{ kind: 'constant' }]],
  ['per-size', [{ kind: 'per-size' }]],
  ['given, fixed', [{ kind: 'given', scale: 'fixed' }]],
  ['given, free', [{ kind: 'given', scale: 'free' }]],
  ['given with freedom', [{ kind: 'given', scale: 'fixed', freedom: 12 }]],
  ['size-power 0.5', [{ kind: 'size-power', exponent: 0.5 }]],
  ['size-power estimated', [{ kind: 'size-power', exponent: 'estimate' }]],
  ['per-size + between', [{ kind: 'per-size' }, { kind: 'between' }]],
  ['given + between', [{ kind: 'given', scale: 'fixed' }, { kind: 'between' }]],
  ['given free + between', [{ kind: 'given', scale: 'free' }, { kind: 'between' }]],
];

const methods = [
  null,
  { method: 'two-step' },
  { method: 'full' },
  { method: 'restricted' },
  { method: 'moments', rule: 'dersimonian-laird' },
  { method: 'moments', rule: 'paule-mandel' },
  { method: 'moments', rule: 'hanushek' },
];

function job(table: Table, parts: Parts, estimate: object | null) {
  const rows = table.x.map((x, g) => [`cell ${g}`, g % 3, x, table.y[g], table.n[g], table.se[g]].join(','));
  const data = ['label,block,x,y,n,se', ...rows].join('\n');
  const plan = {
    format: 'steelyard-plan/1',
    data: { file: 'cells.csv' },
    roles: { label: ['block', 'label'], outcome: 'y', size: 'n', error: 'se' },
    terms: [{ column: 'x' }],
    variance: { parts },
    ...(estimate ? { estimate } : {}),
    beside: ['constant', 'per-size', 'given'],
    matters: { x: 0.1 },
    questions: [
      { kind: 'joint', terms: ['intercept', 'x'], family: 'a' },
      { kind: 'combination', of: { x: 2 }, equals: 1, family: 'a' },
      { kind: 'expect', where: { x: 1 }, size: 10, error: 1 },
      { kind: 'average', of: [{ where: { x: 1 }, share: 1 }], minus: [{ where: { x: 0 }, share: 1 }] },
    ],
  };
  return runText({ text: JSON.stringify(plan), fetch: () => ({ ok: true, value: new TextEncoder().encode(data) }) });
}

/** Places of a value that JSON cannot hold. */
function unsound(value: unknown, at = ''): string[] {
  if (typeof value === 'number') return Number.isFinite(value) ? [] : [`${at}: ${value}`];
  if (value === undefined) return [`${at}: undefined`];
  if (value === null || typeof value !== 'object') return [];
  return Object.entries(value).flatMap(([key, inner]) => unsound(inner, `${at}/${key}`));
}

const refusals = new Set(['not-together', 'nothing-left-over', 'no-convergence', 'not-identified']);

function soundOf(result: Result): void {
  expect(unsound(result)).toEqual([]);
  const valid = validateResult(JSON.parse(JSON.stringify(result)));
  expect(valid.ok ? [] : valid.problems).toEqual([]);
}

describe('hostile cells', () => {
  for (const table of tables)
    it.each(structures)(`${table.name}, %s: an answer without a hole, or a refusal by name`, (_, parts) => {
      for (const estimate of methods) {
        const run = job(table, parts, estimate);
        if (run.ok) soundOf(run.value.result);
        else for (const { code } of run.problems) expect(refusals).toContain(code);
      }
    });
});
