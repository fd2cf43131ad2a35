import type { Outcome } from '@core/protocol/outcome';
import { done } from '@core/protocol/outcome';
import type { Result } from '@core/protocol/result';
import type { Hooks } from '@core/protocol/source';
import { validateResult } from '@core/protocol/validate-result';
import { runText, unhurried } from '@main/engine/run-plan';
import { expect } from 'vitest';

export type Columns = Readonly<Record<string, readonly (number | string)[]>>;

/** What a plan says besides its format and file. */
export type Said = Readonly<Record<string, unknown>>;

/** Texts of files beside the table, by name. */
export type Files = Readonly<Record<string, string>>;

/** A plan on a table, from its text and the bytes of the table to the result. */
export function runOn(columns: Columns, said: Said, files: Files = {}): Outcome<Result> {
  return hookedRun(columns, said, unhurried, files);
}

export function hookedRun(columns: Columns, said: Said, hooks: Hooks, files: Files = {}): Outcome<Result> {
  const names = Object.keys(columns);
  const rows = (columns[names[0] as string] ?? []).map((_, g) => names.map((name) => columns[name]?.[g]).join(','));
  const table = [names.join(','), ...rows].join('\n');
  const text = JSON.stringify({
    format: 'steelyard-plan/1',
    ...said,
    data: { file: 'cells.csv', ...(said['data'] as Said) },
  });
  const fetch = (file: string) => done(new TextEncoder().encode(files[file] ?? table));
  const run = runText({ text, fetch, hooks });
  return run.ok ? done(run.value.result) : run;
}

/** Codes of a refusal; none of an answer, which must be whole: no number that JSON cannot hold, and of the contract's shape. */
export function refusedOrWhole(run: Outcome<Result>): string[] {
  if (!run.ok) return run.problems.map(({ code }) => code);
  expect(unsound(run.value)).toEqual([]);
  const valid = validateResult(JSON.parse(JSON.stringify(run.value)));
  expect(valid.ok ? [] : valid.problems).toEqual([]);
  return [];
}

/** The result of a run that must succeed, whole, with every check on itself passed. */
export function answered(run: Outcome<Result>): Result {
  expect(refusedOrWhole(run)).toEqual([]);
  if (!run.ok) throw new Error('refused');
  expect(run.value.selfChecks.filter(({ passed }) => !passed)).toEqual([]);
  return run.value;
}

/** Places of a value that JSON cannot hold. */
function unsound(value: unknown, at = ''): string[] {
  if (typeof value === 'number') return Number.isFinite(value) ? [] : [`${at}: ${value}`];
  if (value === undefined) return [`${at}: undefined`];
  if (value === null || typeof value !== 'object') return [];
  return Object.entries(value).flatMap(([key, inner]) => unsound(inner, `${at}/${key}`));
}

type Method = { readonly method: string; readonly rule?: string };

export interface Structured {
  readonly name: string;
  readonly parts: readonly Said[];
  /** Methods whose estimate is another than the default's; tried where a table leaves little to estimate from. */
  readonly methods: readonly Method[];
}

const others: readonly Method[] = [{ method: 'full' }, { method: 'two-step' }];
const moments = ['dersimonian-laird', 'paule-mandel', 'hanushek'].map((rule) => ({ method: 'moments', rule }));

/** Every structure of independent cells. */
export const structures: readonly Structured[] = [
  { name: 'constant', parts: [{ kind: 'constant' }], methods: others },
  { name: 'per-size', parts: [{ kind: 'per-size' }], methods: others },
  { name: 'given, fixed', parts: [{ kind: 'given', scale: 'fixed' }], methods: [] },
  { name: 'given, free', parts: [{ kind: 'given', scale: 'free' }], methods: others },
  { name: 'given with freedom', parts: [{ kind: 'given', scale: 'fixed', freedom: 12 }], methods: [] },
  { name: 'size-power 0.5', parts: [{ kind: 'size-power', exponent: 0.5 }], methods: others },
  { name: 'size-power estimated', parts: [{ kind: 'size-power', exponent: 'estimate' }], methods: others },
  { name: 'per-size + between', parts: [{ kind: 'per-size' }, { kind: 'between' }], methods: others },
  {
    name: 'given + between',
    parts: [{ kind: 'given', scale: 'fixed' }, { kind: 'between' }],
    methods: [...others, ...moments],
  },
  { name: 'given free + between', parts: [{ kind: 'given', scale: 'free' }, { kind: 'between' }], methods: others },
  {
    name: 'size-power estimated + between',
    parts: [{ kind: 'size-power', exponent: 'estimate' }, { kind: 'between' }],
    methods: [],
  },
];

/** What a search on few cells may end in: each says what it could not estimate. */
export const searchRefusals: ReadonlySet<string> = new Set(['nothing-left-over', 'no-convergence', 'not-identified']);
