import {
  stateRival,
  stateVariance,
  withBetween,
  withFixed,
  withRival,
  withSampling,
  withTarget,
} from '@core/protocol/edit-structure';
import { addTerm, columnsQuestionsLack, removeTerm } from '@core/protocol/edit-terms';
import { methodsFor, sameVariance } from '@core/protocol/offered-parts';
import type { Part, Plan, Variance } from '@core/protocol/plan';
import { normalPlan } from '@core/protocol/read';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

function planOf(more: object = {}): Plan {
  const plan = normalPlan({
    format: 'steelyard-plan/1',
    data: { file: 'a.csv' },
    roles: { outcome: 'y', size: 'n', error: 'se' },
    terms: [{ column: 'x' }, { column: 'z' }],
    variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }] },
    beside: ['constant'],
    ...more,
  });
  if (!plan.ok) throw new Error(JSON.stringify(plan.problems));
  return plan.value;
}

const perSize: Part = { kind: 'per-size', correlation: null };
const given: Part = { kind: 'given', scale: 'fixed', freedom: null, correlation: null };

describe('stateVariance', () => {
  it('keeps the structure that stood beside, and takes the method back to the structure’s own', () => {
    const plan = planOf();
    const { plan: next, also } = stateVariance(plan, { parts: [perSize], fixed: {} });
    expect(next.beside).toEqual([plan.variance, 'constant']);
    expect(next.estimate).toEqual({ method: 'least-squares' });
    expect(also).toEqual(['estimate']);
  });

  it('does not keep a structure beside that could not be fitted', () => {
    const { plan } = stateVariance(planOf(), { parts: [perSize], fixed: {} }, { refused: true });
    expect(plan.beside).toEqual(['constant']);
  });

  it('keeps a method that was chosen on purpose where it can settle the new structure', () => {
    const { plan, also } = stateVariance(planOf({ estimate: { method: 'full' } }), { parts: [perSize], fixed: {} });
    expect(plan.estimate).toEqual({ method: 'full' });
    expect(also).toEqual([]);
  });

  it('puts Knapp-Hartung inference back where the structure is no longer made for it', () => {
    const plan = planOf({
      variance: { parts: [given, { kind: 'between' }] },
      inference: { kind: 'knapp-hartung', level: 0.9 },
    });
    const { plan: next, also } = stateVariance(plan, { parts: [given], fixed: {} });
    expect(next.inference).toEqual({ kind: 'model', level: 0.9 });
    expect(also).toContain('inference');
  });

  it('lets go of parameters that the new structure does not have', () => {
    const held = withFixed(planOf().variance, 'tau2', 2);
    expect(withBetween(held, false).fixed).toEqual({});
    expect(withSampling(held, given).fixed).toEqual({ tau2: 2 });
  });

  it('changes places with a rival, and back again to the same plan', () => {
    const plan = planOf();
    const there = stateRival(plan, 0).plan;
    expect(there.beside).toEqual([plan.variance]);
    expect(stateRival(there, 0).plan).toEqual(plan);
  });

  it('always leaves a plan that reads as a plan', () => {
    const sampling = fc.constantFrom<Part>(
      perSize,
      given,
      { kind: 'constant', correlation: null },
      {
        kind: 'size-power',
        exponent: 'estimate',
        correlation: null,
      },
    );
    const variance: fc.Arbitrary<Variance> = fc
      .tuple(sampling, fc.boolean())
      .map(([part, between]) => withBetween({ parts: [part], fixed: {} }, between && part.kind !== 'constant'));
    const start = fc.constantFrom(
      planOf(),
      planOf({ inference: { kind: 'robust' }, estimate: { method: 'two-step' } }),
      planOf({
        variance: { parts: [given, { kind: 'between' }] },
        estimate: { method: 'moments', rule: 'paule-mandel' },
        inference: { kind: 'knapp-hartung' },
      }),
    );
    fc.assert(
      fc.property(start, fc.array(variance, { minLength: 1, maxLength: 4 }), (plan, list) => {
        const last = list.reduce((at, one) => stateVariance(at, one).plan, plan);
        expect(normalPlan(last)).toEqual({ ok: true, value: last });
        expect(sameVariance(last.variance, list.at(-1) as Variance)).toBe(true);
        expect(methodsFor(last)).toContain(last.estimate.method);
      }),
    );
  });

  it('does not put the same rival beside twice, nor the stated structure beside itself', () => {
    const plan = planOf();
    expect(withRival(plan, 'constant')).toBe(plan);
    expect(withRival(plan, plan.variance)).toBe(plan);
    expect(withRival(plan, 'given').beside).toEqual(['constant', 'given']);
  });

  it('goes back to model-based inference where weights are no longer the structure’s', () => {
    const plan = planOf({
      variance: { parts: [given, { kind: 'between' }] },
      inference: { kind: 'knapp-hartung' },
    });
    expect(withTarget(plan, 'persons').plan.inference.kind).toBe('model');
  });
});

describe('terms', () => {
  const asking = planOf({
    matters: { x: 1 },
    questions: [
      { kind: 'joint', terms: ['x', 'z'] },
      { kind: 'expect', where: { x: 1, z: 2 } },
    ],
  });

  it('go with the questions and the smallest differences that rest on them, and say so', () => {
    const { plan, also } = removeTerm(asking, 0);
    expect(plan.terms).toEqual([{ column: 'z' }]);
    expect(plan.questions.map(({ kind }) => kind)).toEqual(['expect']);
    expect(plan.matters).toEqual({});
    expect(also).toEqual(['questions-removed', 'matters-removed']);
  });

  it('bring in a column for which questions state a value that is given with them', () => {
    const term = { column: 'w' };
    expect(columnsQuestionsLack(asking, term)).toEqual(['w']);
    const filled = addTerm(asking, term, 5).plan;
    expect(filled.questions[1]).toMatchObject({ where: { x: 1, z: 2, w: 5 } });
    expect(normalPlan(filled)).toEqual({ ok: true, value: filled });
    const left = addTerm(asking, term);
    expect(left.plan.questions).toHaveLength(1);
    expect(left.also).toEqual(['questions-removed']);
  });

  it('of a name that stands already are not added again', () => {
    expect(addTerm(asking, { column: 'x' }).plan).toBe(asking);
  });

  it('that are categories carry questions about any of their levels', () => {
    const plan = planOf({
      terms: [{ column: 'r', as: 'category' }, { column: 'x' }],
      questions: [{ kind: 'combination', of: { 'r: South': 1, x: 1 } }],
    });
    expect(addTerm(plan, { column: 'z' }).plan.questions).toHaveLength(1);
    expect(removeTerm(plan, 0).plan.questions).toHaveLength(0);
  });
});
