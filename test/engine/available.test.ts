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
const serial = { kind: 'serial', by: ['town'], order: 'year' };

/** Everything of the contract that `run` refuses in this version, by the name it refuses, with a plan that asks for it alone. */
const refused: readonly [string, object][] = [
  ['limits', { data: { file: 'cells.csv', limits: { y: { rounding: 5 } } } }],
  ['sizeWithin', { data: { file: 'cells.csv', sizeWithin: 2 } }],
  ['withinSd', { roles: { ...plain.roles, withinSd: 'sd' } }],
  [
    'logit',
    {
      outcomeScale: 'logit',
      roles: { ...plain.roles, outcomeUnit: 'share' },
      ...parts({ kind: 'given', scale: 'fixed' }),
    },
  ],
  ['matrix', parts({ kind: 'matrix', file: 'm.csv', scale: 'fixed' })],
  ['log-linear', parts({ kind: 'log-linear', terms: [{ column: 'x' }] })],
  ['per-class', parts({ kind: 'per-class', column: 'kind' })],
  ['binomial', { roles: { label: ['town'], count: 'd', size: 'n' }, ...parts({ kind: 'binomial', scale: 'fixed' }) }],
  ['counts', { roles: { label: ['town'], count: 'd', exposure: 'e' }, ...parts({ kind: 'counts', scale: 'fixed' }) }],
  ['shared', parts({ kind: 'per-size' }, { kind: 'shared', by: ['town'] })],
  [
    'exchangeable',
    parts({ kind: 'per-size' }, { kind: 'between', correlation: { kind: 'exchangeable', by: ['town'] } }),
  ],
  ['serial', parts({ kind: 'per-size' }, { kind: 'between', correlation: serial })],
  ['clustered', { inference: { kind: 'clustered', by: ['town'] } }],
  ['wild', { inference: { kind: 'wild', by: ['town'] } }],
  ['kenward-roger', { inference: { kind: 'kenward-roger' }, ...parts({ kind: 'per-size' }, { kind: 'between' }) }],
  ['disclosure', { disclosure: { profile: 'house rules', version: '1' } }],
];

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
      'model',
      'knapp-hartung',
      'robust',
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
      { inference: { kind: 'robust', correction: 'HC4' } },
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
      { tests: { neighbours: 'pairs.csv' } },
    ])
      expect(unavailable(asked(changes))).toEqual([]);
  });

  it('is refused in rivals and targets too, at their places', () => {
    const problems = unavailable(
      asked({
        beside: ['constant', { parts: [{ kind: 'per-class', column: 'k' }] }],
        target: { parts: [{ kind: 'per-class', column: 'k' }] },
      }),
    );
    expect(problems.map(({ at }) => at?.split('/').slice(0, 3).join('/'))).toEqual(['/target/parts', '/beside/1']);
  });

  it('belongs to the version that package.json names', () => {
    expect(VERSION).toBe((JSON.parse(readFileSync(resolve('package.json'), 'utf8')) as { version: string }).version);
  });
});
