import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { unavailable } from '@core/available';
import type { Plan } from '@core/protocol/plan';
import { normalPlan } from '@core/protocol/read';
import { VERSION } from '@core/version';
import { describe, expect, it } from 'vitest';

const plain = {
  format: 'steelyard-plan/1',
  data: { file: 'cells.csv' },
  roles: { label: ['town'], outcome: 'y', size: 'n', error: 'se' },
  terms: [{ column: 'x' }],
  variance: { parts: [{ kind: 'per-size' }] },
};

function asked(changes: object): Plan {
  const plan = normalPlan({ ...plain, ...changes });
  if (!plan.ok) throw new Error(JSON.stringify(plan.problems));
  return plan.value;
}

const parts = (...kinds: object[]) => ({ variance: { parts: kinds } });
const proportion = { label: ['town'], count: 'd', size: 'n' };
const rate = { label: ['town'], count: 'd', exposure: 'e' };
const serial = { kind: 'serial', by: ['town'], order: 'year' };
const exchangeable = { kind: 'exchangeable', by: ['town'] };

/** Everything of the contract that `run` refuses in this version, by the name it refuses, with a plan that asks for it alone. */
const refused: readonly [string, object][] = [['disclosure', { disclosure: { profile: 'house rules', version: '1' } }]];

describe('what this version does not fit', () => {
  it.each(refused)('%s is refused by its name, at its place', (what, changes) => {
    const problems = unavailable(asked(changes));
    expect(problems.map(({ code, facts }) => [code, facts])).toEqual([['not-available', { what }]]);
    for (const { at } of problems) expect(at).toMatch(/^\//);
  });

  it('is all of that and nothing else: every other kind of part, inference, target, scale and method passes', () => {
    const kinds = JSON.parse(readFileSync(resolve('resources/schemas/plan.json'), 'utf8')) as object;
    const named = [...JSON.stringify(kinds).matchAll(/"kind":\{"(?:const|enum)":(\[[^\]]*\]|"[^"]*")/g)].flatMap(
      (m) => JSON.parse(m[1] as string) as string | string[],
    );
    const passes = [
      'constant',
      'per-size',
      'given',
      'size-power',
      'proxy',
      'between',
      'matrix',
      'log-linear',
      'per-class',
      'binomial',
      'counts',
      'shared',
      'exchangeable',
      'serial',
      'model',
      'knapp-hartung',
      'robust',
      'clustered',
      'wild',
      'kenward-roger',
      'joint',
      'combination',
      'expect',
      'average',
    ];
    expect([...new Set(named)].sort()).toEqual(
      [...passes, ...refused.map(([what]) => what).filter((what) => named.includes(what))].sort(),
    );
    for (const changes of [
      {},
      parts({ kind: 'constant' }),
      parts({ kind: 'given', scale: 'free' }),
      parts({ kind: 'given', scale: 'fixed', freedom: { column: 'd' } }, { kind: 'between' }),
      parts({ kind: 'size-power', exponent: 0.5 }),
      parts({ kind: 'size-power', exponent: 'estimate' }, { kind: 'between' }),
      parts({ kind: 'proxy', column: 'z' }),
      parts({ kind: 'matrix', file: 'm.csv', scale: 'fixed' }),
      parts({ kind: 'log-linear', terms: [{ column: 'x' }], correlation: serial }),
      parts({ kind: 'per-class', column: 'kind' }, { kind: 'shared', by: ['year'] }, { kind: 'shared', by: ['town'] }),
      parts({ kind: 'per-size', correlation: exchangeable }, { kind: 'between', correlation: serial }),
      { roles: { label: ['town'], count: 'd', size: 'n' }, ...parts({ kind: 'binomial', scale: 'fixed' }) },
      { roles: { label: ['town'], count: 'd', exposure: 'e' }, ...parts({ kind: 'counts', scale: 'free' }) },
      { roles: { ...plain.roles, withinSd: 'sd' } },
      {
        outcomeScale: 'logit',
        roles: { ...plain.roles, outcomeUnit: 'share' },
        ...parts({ kind: 'given', scale: 'fixed' }),
      },
      { inference: { kind: 'robust', correction: 'HC4' } },
      { inference: { kind: 'clustered', by: ['town'] } },
      { inference: { kind: 'clustered', by: ['town'], alsoBy: ['year'] } },
      { inference: { kind: 'wild', by: ['town'] } },
      { inference: { kind: 'kenward-roger' }, ...parts({ kind: 'per-size' }, { kind: 'between' }) },
      { target: 'persons' },
      { target: 'cells' },
      { target: 'diagonal' },
      { target: { parts: [{ kind: 'size-power', exponent: 0.5 }] } },
      { outcomeScale: 'log', ...parts({ kind: 'given', scale: 'fixed' }) },
      { estimate: { method: 'two-step' }, ...parts({ kind: 'per-size' }, { kind: 'between' }) },
      {
        estimate: { method: 'moments', rule: 'paule-mandel' },
        ...parts({ kind: 'given', scale: 'fixed' }, { kind: 'between' }),
      },
      { roles: { ...plain.roles, withinSd: 'sd' } },
      {
        outcomeScale: 'logit',
        roles: { ...plain.roles, outcomeUnit: 'share' },
        ...parts({ kind: 'given', scale: 'fixed' }),
      },
      { roles: proportion, ...parts({ kind: 'binomial', scale: 'free' }, { kind: 'between' }) },
      {
        roles: proportion,
        outcomeScale: 'logit',
        addedHalf: 'all-cells',
        ...parts({ kind: 'binomial', scale: 'fixed' }),
      },
      {
        roles: proportion,
        outcomeScale: 'logit',
        estimate: { method: 'full' },
        ...parts({ kind: 'binomial', scale: 'fixed' }),
      },
      { roles: rate, outcomeScale: 'log', ...parts({ kind: 'counts', scale: 'free' }) },
      { tests: { neighbours: 'pairs.csv' } },
      { data: { file: 'cells.csv', limits: { y: { rounding: 5 } } } },
      { data: { file: 'cells.csv', sizeWithin: 2 } },
    ])
      expect(unavailable(asked(changes))).toEqual([]);
  });

  it('belongs to the version that package.json names', () => {
    expect(VERSION).toBe((JSON.parse(readFileSync(resolve('package.json'), 'utf8')) as { version: string }).version);
  });
});
