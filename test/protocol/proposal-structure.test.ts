import { unavailable } from '@core/available';
import { noRoles } from '@core/protocol/draft';
import { sameVariance, varianceOfRival } from '@core/protocol/offered-parts';
import type { OutcomeScale, Plan, Roles } from '@core/protocol/plan';
import {
  answersOf,
  type Beyond,
  likelyAnswers,
  type Origin,
  proposeStructure,
  type Together,
} from '@core/protocol/proposal-structure';
import { normalPlan } from '@core/protocol/read';
import { proposalReason } from '@core/words/screen-structure';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const bare: Roles = { ...noRoles, outcome: 'y' };

const open: Together = { kind: 'open' };

/** A plan's share in a proposal. */
function on(roles: Partial<Roles>, outcomeScale: OutcomeScale = 'identity') {
  return { roles: { ...bare, ...roles }, outcomeScale };
}

function planWith({ roles, outcomeScale }: Pick<Plan, 'roles' | 'outcomeScale'>, variance: object): Plan {
  const plan = normalPlan({
    format: 'steelyard-plan/1',
    data: { file: 'a.csv' },
    roles,
    outcomeScale,
    variance,
  });
  if (!plan.ok) throw new Error(JSON.stringify(plan.problems));
  return plan.value;
}

describe('proposeStructure', () => {
  it('proposes size and a between part for means of respondents where the rest is open', () => {
    const { variance, beside } = proposeStructure(
      { origin: 'respondents', beyond: 'open', together: open },
      on({ size: 'n' }),
    );
    expect(variance.parts.map(({ kind }) => kind)).toEqual(['per-size', 'between']);
    expect(beside.slice(0, 2)).toEqual(['constant', 'per-size']);
  });

  it('takes given errors as they stand, and asks for a factor only where that was the answer', () => {
    const scaleFor = (origin: Origin) =>
      proposeStructure({ origin, beyond: 'no', together: open }, on({ error: 'se' })).variance.parts;
    expect(scaleFor('own-error')).toMatchObject([{ kind: 'given', scale: 'fixed' }]);
    expect(scaleFor('error-to-a-factor')).toMatchObject([{ kind: 'given', scale: 'free' }]);
  });

  it('adds no between part to a constant variance, from which it could not be told', () => {
    const { variance, reasons } = proposeStructure({ origin: 'complete', beyond: 'yes', together: open }, on({}));
    expect(variance.parts).toHaveLength(1);
    expect(reasons.beyond).toEqual(['between-in-constant']);
  });

  it('takes shares and rates by their own variances where their columns are stated', () => {
    const partFor = (origin: Origin, roles: Partial<Roles>) =>
      proposeStructure({ origin, beyond: 'no', together: open }, on(roles));
    const share = { outcomeUnit: 'share', size: 'n' } as const;
    expect(partFor('share', share).variance.parts).toMatchObject([{ kind: 'binomial', scale: 'free' }]);
    expect(partFor('share', { size: 'n' }).variance.parts).toMatchObject([{ kind: 'per-size' }]);
    expect(partFor('share', { size: 'n' }).reasons.origin).toEqual(['share-not-stated']);
    const rate = { outcome: null, count: 'k', exposure: 'e' };
    expect(partFor('count', rate).variance.parts).toMatchObject([{ kind: 'counts', scale: 'free' }]);
    expect(partFor('count', { exposure: 'e' }).variance.parts).toMatchObject([{ kind: 'proxy', exponent: -1 }]);
  });

  it('lets a group share a shock beside what sets cells apart, and correlates sampling errors where nothing does', () => {
    const by = { kind: 'group', by: ['region'] } as const;
    const partsFor = (beyond: Beyond) =>
      proposeStructure({ origin: 'respondents', beyond, together: by }, on({ size: 'n' })).variance.parts;
    expect(partsFor('yes')).toMatchObject([
      { kind: 'per-size', correlation: null },
      { kind: 'between', correlation: null },
      { kind: 'shared', by: ['region'] },
    ]);
    expect(partsFor('no')).toEqual([{ kind: 'per-size', correlation: { kind: 'exchangeable', by: ['region'] } }]);
  });

  it('lets what sets cells apart fade along an order, and puts the independent cells beside', () => {
    const order = { kind: 'order', by: ['region'], order: 'year' } as const;
    const serial = { kind: 'serial', by: ['region'], order: 'year' };
    const found = proposeStructure({ origin: 'respondents', beyond: 'yes', together: order }, on({ size: 'n' }));
    expect(found.variance.parts).toMatchObject([
      { kind: 'per-size', correlation: null },
      { kind: 'between', correlation: serial },
    ]);
    expect(found.beside[0]).toMatchObject({ parts: [{ kind: 'per-size' }, { kind: 'between', correlation: null }] });
    const flat = proposeStructure({ origin: 'complete', beyond: 'open', together: order }, on({}));
    expect(flat.variance.parts).toMatchObject([{ kind: 'constant', correlation: serial }]);
  });

  it('leaves the likelihood of counts with a logarithm its one part, and says why', () => {
    const rate = { outcome: null, count: 'k', exposure: 'e' };
    const together = { kind: 'group', by: ['region'] } as const;
    const { variance, reasons } = proposeStructure({ origin: 'count', beyond: 'yes', together }, on(rate, 'log'));
    expect(variance.parts).toEqual([{ kind: 'counts', scale: 'free', correlation: null }]);
    expect(reasons).toMatchObject({ beyond: ['between-with-link'], together: ['together-with-link'] });
  });

  it('always gives a structure that the form of a plan allows, every rival too, with a sentence for every reason', () => {
    const column = fc.constantFrom(null, 'col');
    const together: fc.Arbitrary<Together> = fc.oneof(
      fc.constantFrom<Together>({ kind: 'no' }, { kind: 'open' }),
      fc.constant<Together>({ kind: 'group', by: ['g'] }),
      fc.constant<Together>({ kind: 'order', by: [], order: 't' }),
    );
    const origins = ['respondents', 'own-error', 'error-to-a-factor', 'share', 'count', 'complete', 'unknown'] as const;
    fc.assert(
      fc.property(
        fc.constantFrom<Origin>(...origins),
        fc.constantFrom<Beyond>('yes', 'no', 'open'),
        together,
        fc.record({ size: column, error: column }),
        fc.constantFrom<Partial<Roles>>(
          { outcome: 'y' },
          { outcome: 'y', outcomeUnit: 'share' },
          { outcome: null, count: 'k', exposure: 'e' },
        ),
        fc.constantFrom<OutcomeScale>('identity', 'log'),
        (origin, beyond, how, measured, of, outcomeScale) => {
          const plan = on({ ...measured, ...of }, outcomeScale);
          const found = proposeStructure({ origin, beyond, together: how }, plan);
          for (const rival of [found.variance, ...found.beside])
            expect(unavailable(planWith(plan, varianceOfRival(rival)))).toEqual([]);
          expect(found.beside.some((rival) => sameVariance(rival, found.variance))).toBe(false);
          for (const reason of Object.values(found.reasons).flat()) expect(proposalReason(reason)).toMatch(/[.:]$/);
        },
      ),
    );
  });
});

describe('likelyAnswers and answersOf', () => {
  it('read the origin off the roles', () => {
    expect(likelyAnswers({ ...bare, error: 'se', size: 'n' }).origin).toBe('own-error');
    expect(likelyAnswers({ ...bare, outcome: null, count: 'k', exposure: 'e' }).origin).toBe('count');
    expect(likelyAnswers({ ...bare, outcome: null, count: 'k', size: 'n' }).origin).toBe('share');
    expect(likelyAnswers({ ...bare, size: 'n' }).origin).toBe('respondents');
    expect(likelyAnswers(bare).origin).toBe('unknown');
  });

  it('read a stated structure back to the answers that propose it', () => {
    const roles = { ...bare, size: 'n' };
    const stated = proposeStructure(
      { origin: 'respondents', beyond: 'yes', together: { kind: 'no' } },
      on(roles),
    ).variance;
    const answers = answersOf({ variance: stated, roles });
    expect(answers).toEqual({ origin: 'respondents', beyond: 'yes', together: { kind: 'no' } });
    expect(proposeStructure(answers, on(roles)).variance).toEqual(stated);
  });
});
