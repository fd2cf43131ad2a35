import { unavailable } from '@core/available';
import { noRoles } from '@core/protocol/draft';
import { isOffered, isOfferedInference, lackingIn, sameVariance } from '@core/protocol/offered-parts';
import type { Inference, Part, Plan, Roles } from '@core/protocol/plan';
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

function planWith(roles: Partial<Roles>, variance: object): Plan {
  const plan = normalPlan({
    format: 'steelyard-plan/1',
    data: { file: 'a.csv' },
    roles: { outcome: 'y', ...roles },
    variance,
  });
  if (!plan.ok) throw new Error(JSON.stringify(plan.problems));
  return plan.value;
}

describe('proposeStructure', () => {
  it('proposes size and a between part for means of respondents where the rest is open', () => {
    const { variance, wished, beside } = proposeStructure(
      { origin: 'respondents', beyond: 'open', together: open },
      { ...bare, size: 'n' },
    );
    expect(variance.parts.map(({ kind }) => kind)).toEqual(['per-size', 'between']);
    expect(wished).toBeNull();
    expect(beside.slice(0, 2)).toEqual(['constant', 'per-size']);
  });

  it('takes given errors as they stand, and asks for a factor only where that was the answer', () => {
    const roles = { ...bare, error: 'se' };
    const scaleFor = (origin: Origin) =>
      proposeStructure({ origin, beyond: 'no', together: open }, roles).variance.parts;
    expect(scaleFor('own-error')).toMatchObject([{ kind: 'given', scale: 'fixed' }]);
    expect(scaleFor('error-to-a-factor')).toMatchObject([{ kind: 'given', scale: 'free' }]);
  });

  it('adds no between part to a constant variance, from which it could not be told', () => {
    const { variance, reasons } = proposeStructure({ origin: 'complete', beyond: 'yes', together: open }, bare);
    expect(variance.parts).toHaveLength(1);
    expect(reasons.beyond).toEqual(['between-in-constant']);
  });

  it('keeps what it cannot fit as a wish and names what is lacking', () => {
    const { variance, wished, lacking } = proposeStructure(
      { origin: 'share', beyond: 'yes', together: { kind: 'group', by: ['region'] } },
      { ...bare, outcomeUnit: 'share', size: 'n' },
    );
    expect(variance.parts.map(({ kind }) => kind)).toEqual(['per-size', 'between']);
    expect(wished?.parts.map(({ kind }) => kind)).toEqual(['binomial', 'between', 'shared']);
    expect(lacking).toEqual(['binomial', 'shared']);
  });

  it('always gives a structure that the form of a plan allows and this version fits, with a sentence for every reason', () => {
    const column = fc.constantFrom(null, 'col');
    const together: fc.Arbitrary<Together> = fc.oneof(
      fc.constantFrom<Together>({ kind: 'no' }, { kind: 'open' }),
      fc.constant<Together>({ kind: 'group', by: ['g'] }),
      fc.constant<Together>({ kind: 'order', by: [], order: 't' }),
    );
    fc.assert(
      fc.property(
        fc.constantFrom<Origin>(
          'respondents',
          'own-error',
          'error-to-a-factor',
          'share',
          'count',
          'complete',
          'unknown',
        ),
        fc.constantFrom<Beyond>('yes', 'no', 'open'),
        together,
        fc.record({ size: column, error: column }),
        fc.constantFrom({ outcome: 'y', count: null, exposure: null }, { outcome: null, count: 'k', exposure: 'e' }),
        (origin, beyond, how, measured, of) => {
          const roles: Roles = { ...bare, ...measured, ...of };
          const found = proposeStructure({ origin, beyond, together: how }, roles);
          const plan = planWith(roles, found.variance);
          expect(unavailable({ ...plan, beside: [...found.beside] })).toEqual([]);
          expect(found.beside.some((rival) => sameVariance(rival, found.variance))).toBe(false);
          expect((found.wished === null) === (found.lacking.length === 0)).toBe(true);
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
    const stated = proposeStructure({ origin: 'respondents', beyond: 'yes', together: { kind: 'no' } }, roles).variance;
    const answers = answersOf({ variance: stated, roles });
    expect(answers).toEqual({ origin: 'respondents', beyond: 'yes', together: { kind: 'no' } });
    expect(proposeStructure(answers, roles).variance).toEqual(stated);
  });
});

describe('what this version fits', () => {
  const parts: readonly Part[] = [
    { kind: 'constant', correlation: null },
    { kind: 'per-size', correlation: null },
    { kind: 'given', scale: 'free', freedom: null, correlation: null },
    { kind: 'matrix', file: 'm.csv', scale: 'fixed', freedom: null },
    { kind: 'size-power', exponent: 1, correlation: null },
    { kind: 'proxy', column: 'z', exponent: 1, correlation: null },
    { kind: 'log-linear', terms: [{ column: 'z' }], correlation: null },
    { kind: 'per-class', column: 'c', perSize: false, correlation: null },
    { kind: 'binomial', scale: 'free', correlation: null },
    { kind: 'counts', scale: 'free', correlation: null },
    { kind: 'between', correlation: null },
    { kind: 'shared', by: ['g'] },
    { kind: 'constant', correlation: { kind: 'exchangeable', by: ['g'] } },
  ];

  it.each(parts)('agrees with what the fit refuses: $kind', (part) => {
    const plan = planWith({}, { parts: [{ kind: 'constant' }] });
    const refused = unavailable({ ...plan, variance: { parts: [part], fixed: {} } }).map(({ facts }) => facts);
    expect(lackingIn({ parts: [part] }).map((what) => ({ what }))).toEqual(refused);
    if (!('correlation' in part) || part.correlation === null) expect(isOffered(part.kind)).toBe(refused.length === 0);
  });

  it.each<Inference>([
    { kind: 'model', level: 0.95 },
    { kind: 'knapp-hartung', level: 0.95, floor: false },
    { kind: 'kenward-roger', level: 0.95 },
    { kind: 'robust', level: 0.95, correction: 'HC3' },
    { kind: 'clustered', level: 0.95, correction: 'CR2', by: ['g'], alsoBy: null },
    { kind: 'wild', level: 0.95, by: ['g'], replications: 99, seed: 1 },
  ])('agrees with what the fit refuses: inference $kind', (inference) => {
    const plan = planWith({}, { parts: [{ kind: 'constant' }] });
    expect(isOfferedInference(inference.kind)).toBe(unavailable({ ...plan, inference }).length === 0);
  });
});
