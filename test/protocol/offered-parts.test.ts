import { unavailable } from '@core/available';
import { noRoles } from '@core/protocol/draft';
import { partOf } from '@core/protocol/edit-parts';
import {
  isOffered,
  isOfferedCorrelation,
  isOfferedInference,
  isOfferedKey,
  lackingIn,
} from '@core/protocol/offered-parts';
import type { Correlation, Inference, Part, PartKind, Plan } from '@core/protocol/plan';
import { readPlan } from '@core/protocol/read';
import { describe, expect, it } from 'vitest';

const kinds: readonly PartKind[] = [
  'constant',
  'per-size',
  'given',
  'matrix',
  'size-power',
  'proxy',
  'log-linear',
  'per-class',
  'binomial',
  'counts',
  'between',
  'shared',
];
const correlations: readonly Correlation[] = [
  { kind: 'exchangeable', by: ['region'] },
  { kind: 'serial', by: [], order: 'year' },
];
const inferences: readonly Inference[] = [
  { kind: 'model', level: 0.95 },
  { kind: 'knapp-hartung', level: 0.95, floor: false },
  { kind: 'kenward-roger', level: 0.95 },
  { kind: 'robust', level: 0.95, correction: 'HC3' },
  { kind: 'clustered', level: 0.95, correction: 'CR2', by: ['region'], alsoBy: null },
  { kind: 'wild', level: 0.95, by: ['region'], replications: 99, seed: 1 },
];

const read = readPlan(
  '{"format":"steelyard-plan/1","data":{"file":"c.csv"},"roles":{"outcome":"y","size":"n","error":"s"},"variance":{"parts":[{"kind":"constant"}]}}',
);
const plain: Plan = read.ok ? read.value : expect.fail('no plan');

/** What the fit refuses of a plan, by name. */
const refused = (change: Partial<Plan>): string[] =>
  unavailable({ ...plain, ...change }).map(({ facts }) => (facts as { what: string }).what);
const named = (part: Part) => partOf(part.kind, { column: 'x', file: 'm.csv', by: ['region'] });

describe('what this version does not fit', () => {
  it.each(kinds)('is the same to the screens as to the fit: the part %s', (kind) => {
    const part = named(partOf(kind));
    expect(refused({ variance: { parts: [part], fixed: {} } })).toEqual(isOffered(kind) ? [] : [kind]);
    expect(lackingIn({ parts: [part] })).toEqual(isOffered(kind) ? [] : [kind]);
  });

  it.each(correlations)('is the same to the screens as to the fit: the correlation $kind', (correlation) => {
    const part: Part = { kind: 'between', correlation };
    const expected = isOfferedCorrelation(correlation.kind) ? [] : [correlation.kind];
    expect(refused({ variance: { parts: [part], fixed: {} } })).toEqual(expected);
    expect(lackingIn({ parts: [part] })).toEqual(expected);
  });

  it.each(inferences)('is the same to the screens as to the fit: the inference $kind', (inference) => {
    expect(refused({ inference })).toEqual(isOfferedInference(inference.kind) ? [] : [inference.kind]);
  });

  it('is the same to the screens as to the fit: keys', () => {
    const { data, roles } = plain;
    const asked = {
      limits: { data: { ...data, limits: { y: { rounding: 5 } } } },
      sizeWithin: { data: { ...data, sizeWithin: 3 } },
      withinSd: { roles: { ...noRoles, ...roles, withinSd: 'sd' } },
      logit: { outcomeScale: 'logit' },
      disclosure: { disclosure: { profile: 'p', version: '1' } },
    } as const;
    for (const key of Object.keys(asked) as (keyof typeof asked)[])
      expect(refused(asked[key] as Partial<Plan>), key).toEqual(isOfferedKey(key) ? [] : [key]);
  });
});
