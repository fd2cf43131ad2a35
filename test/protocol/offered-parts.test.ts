import { unavailable } from '@core/available';
import { noRoles } from '@core/protocol/draft';
import { partOf } from '@core/protocol/edit-parts';
import {
  isSamplingAndBetween,
  methodsFor,
  roleLacking,
  sameVariance,
  varianceOfRival,
} from '@core/protocol/offered-parts';
import type { OutcomeScale, Part, PartKind, Plan, Roles } from '@core/protocol/plan';
import { normalPlan } from '@core/protocol/read';
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

/** A plan as the form of a plan reads it, or null where that refuses it. */
function planOf(keys: object): Plan | null {
  const read = normalPlan({ format: 'steelyard-plan/1', data: { file: 'c.csv' }, ...keys });
  return read.ok ? read.value : null;
}

describe('what a kind of part needs', () => {
  const part = (kind: PartKind): Part =>
    partOf(kind, { column: 'x', file: 'm.csv', by: ['region'], terms: [{ column: 'x' }] });
  const asked: readonly Partial<Roles>[] = [
    { outcome: 'y' },
    { outcome: 'y', size: 'n' },
    { outcome: 'y', error: 's' },
    { outcome: 'y', outcomeUnit: 'share', size: 'n' },
    { outcome: 'y', outcomeUnit: 'share' },
    { count: 'k', size: 'n' },
    { count: 'k', exposure: 'e' },
  ];

  it.each(kinds)('is what the form of a plan demands: %s', (kind) => {
    for (const own of asked) {
      const roles = { ...noRoles, ...own };
      const sampling = kind === 'between' || kind === 'shared' ? [part('proxy')] : [];
      const plan = planOf({ roles, variance: { parts: [...sampling, part(kind)] } });
      expect(plan !== null, JSON.stringify(own)).toBe(roleLacking(kind, roles) === null);
      if (plan !== null) expect(unavailable(plan)).toEqual([]);
    }
  });
});

describe('the methods that are offered', () => {
  const structures: readonly (readonly [string, object, object])[] = [
    ['a constant', { outcome: 'y' }, { parts: [{ kind: 'constant' }] }],
    ['sizes and between', { outcome: 'y', size: 'n' }, { parts: [{ kind: 'per-size' }, { kind: 'between' }] }],
    [
      'errors and between',
      { outcome: 'y', error: 's' },
      { parts: [{ kind: 'given', scale: 'fixed' }, { kind: 'between' }] },
    ],
    ['shares', { outcome: 'y', outcomeUnit: 'share', size: 'n' }, { parts: [{ kind: 'binomial', scale: 'free' }] }],
    [
      'shares and between',
      { count: 'k', size: 'n' },
      { parts: [{ kind: 'binomial', scale: 'fixed' }, { kind: 'between' }] },
    ],
    ['counts', { count: 'k', exposure: 'e' }, { parts: [{ kind: 'counts', scale: 'fixed' }] }],
  ];
  const scales: readonly OutcomeScale[] = ['identity', 'log', 'logit'];

  it.each(structures)('are those that the form of a plan allows: %s', (_, roles, variance) => {
    for (const outcomeScale of scales) {
      const plan = planOf({ roles, variance, outcomeScale });
      if (plan === null) continue;
      for (const method of ['least-squares', 'restricted', 'full', 'two-step', 'moments'] as const) {
        const estimate = method === 'moments' ? { method, rule: 'paule-mandel' } : { method };
        const allowed = planOf({ roles, variance, outcomeScale, estimate }) !== null;
        expect(methodsFor(plan).includes(method), `${method} on ${outcomeScale}`).toBe(allowed);
      }
    }
  });

  it('hold moments for errors from outside with a between part alone', () => {
    const given = { kind: 'given', scale: 'fixed', freedom: null, correlation: null } as const;
    const between = { kind: 'between', correlation: null } as const;
    expect(isSamplingAndBetween([given, between])).toBe(true);
    expect(isSamplingAndBetween([{ ...given, scale: 'free' }, between])).toBe(false);
    expect(isSamplingAndBetween([given])).toBe(false);
  });
});

describe('a rival', () => {
  it('in a word is the structure that the word stands for, and parts can stand in any order', () => {
    expect(varianceOfRival('given').parts).toMatchObject([{ kind: 'given', scale: 'free' }]);
    expect(sameVariance('constant', varianceOfRival('constant'))).toBe(true);
    const parts: Part[] = [partOf('per-size'), partOf('between')];
    expect(sameVariance({ parts, fixed: {} }, { parts: parts.toReversed(), fixed: {} })).toBe(true);
    expect(sameVariance({ parts, fixed: {} }, { parts, fixed: { tau2: 1 } })).toBe(false);
  });
});
