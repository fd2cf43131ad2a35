import { inferenceOf } from '@core/inference/inferred';
import { questionsOf } from '@core/inference/questions';
import { robustBeside } from '@core/inference/robust-beside';
import type { Inference, Plan } from '@core/protocol/plan';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fitOf, planFor, withTable } from './whole-fit';

type Parts = Plan['variance']['parts'];

const given: Parts = [{ kind: 'given', scale: 'fixed', freedom: null, correlation: null }];
const structures: readonly { readonly parts: Parts; readonly estimate: Plan['estimate'] }[] = [
  { parts: [{ kind: 'per-size', correlation: null }], estimate: { method: 'least-squares' } },
  { parts: given, estimate: { method: 'least-squares' } },
  { parts: [...given, { kind: 'between', correlation: null }], estimate: { method: 'restricted' } },
  {
    parts: [
      { kind: 'per-size', correlation: null },
      { kind: 'shared', by: ['g'] },
    ],
    estimate: { method: 'restricted' },
  },
];
const inferences: readonly Inference[] = [
  { kind: 'model', level: 0.95 },
  { kind: 'kenward-roger', level: 0.95 },
  ...(['CR0', 'CR1', 'CR2', 'CR3'] as const).map(
    (correction): Inference => ({ kind: 'clustered', level: 0.95, correction, by: ['g'], alsoBy: null }),
  ),
  { kind: 'clustered', level: 0.95, correction: 'CR0', by: ['g'], alsoBy: ['h'] },
  { kind: 'clustered', level: 0.95, correction: 'CR1', by: ['g'], alsoBy: ['h'] },
  { kind: 'wild', level: 0.95, by: ['g'], replications: 49, seed: 3 },
];
const questions: Plan['questions'] = [
  { kind: 'joint', terms: ['x', 'z'], name: null, family: 'a' },
  { kind: 'combination', of: { x: 1, z: -1 }, equals: 0.5, name: null, family: 'a' },
  { kind: 'expect', where: { x: 1, z: 2 }, size: 9, error: 1, name: null, family: null },
  {
    kind: 'average',
    of: [{ where: { x: 1, z: 2 }, share: 1 }],
    minus: [{ where: { x: 0, z: 2 }, share: 1 }],
    name: null,
    family: 'a',
  },
];

/** Cells as nasty as a file can hold them: sizes and errors over twelve orders, outcomes that are equal or huge, groups of one. */
const rows = fc.array(
  fc.record({
    y: fc.oneof(fc.constant(0), fc.integer({ min: -9, max: 9 }), fc.constantFrom(1e12, -1e-12, 5e150)),
    x: fc.oneof(fc.integer({ min: -5, max: 5 }), fc.constantFrom(1e9, 1e-9)),
    z: fc.integer({ min: 0, max: 3 }),
    n: fc.constantFrom(1, 3, 40, 1e6, 1e12),
    s: fc.constantFrom(1e-6, 0.1, 1, 7, 1e6),
    g: fc.integer({ min: 0, max: 6 }),
    h: fc.integer({ min: 0, max: 2 }),
  }),
  { minLength: 3, maxLength: 14 },
);

/** Every number in a value that is none. */
function holesIn(value: unknown, at = ''): string[] {
  if (typeof value === 'number') return Number.isFinite(value) ? [] : [`${at}: ${value}`];
  if (value === undefined) return [`${at}: undefined`];
  if (value === null || typeof value !== 'object') return [];
  return Object.entries(value).flatMap(([key, one]) => holesIn(one, `${at}/${key}`));
}

/** A p value, where there is one, is a chance. */
function chancesIn(value: unknown): number[] {
  if (value === null || typeof value !== 'object') return [];
  return Object.entries(value).flatMap(([key, one]) =>
    (key === 'p' || key === 'pHolm') && typeof one === 'number' ? [one] : chancesIn(one),
  );
}

describe('inference on hostile cells', () => {
  it('gives numbers or null, chances between 0 and 1, or a refusal by name; never NaN', () => {
    const seen = new Map<string, number>();
    fc.assert(
      fc.property(
        rows,
        fc.constantFrom(...structures),
        fc.constantFrom(...inferences),
        (some, structure, inference) => {
          const table = Object.fromEntries(
            (['y', 'x', 'z', 'n', 's', 'g', 'h'] as const).map((key) => [key, some.map((row) => row[key])]),
          );
          const terms: Plan['terms'] = [{ column: 'x' }, { column: 'z' }];
          const plan = planFor({ outcome: 'y', size: 'n', error: 's', terms, ...structure, inference, questions });
          const fit = (() => {
            try {
              return fitOf(plan, withTable(table)(plan));
            } catch (error) {
              // The design or the likelihood is refused by name before any inference, or the weights leave a column no room.
              if (error instanceof Error && /^\[\{"code"|under the weights alone/.test(error.message)) return null;
              throw error;
            }
          })();
          if (!fit) return;
          const { fitted, cells, known } = fit;
          const inferred = inferenceOf({ fitted, cells, plan });
          if (!inferred.ok) {
            for (const { code } of inferred.problems) expect(['too-few-clusters', 'cluster-decides']).toContain(code);
            return;
          }
          const { coefficients, covariance, wild } = inferred.value;
          const answers = questionsOf({ plan, fitted, inferred: inferred.value, known, cells });
          const told = { coefficients, covariance, wild, answers, beside: robustBeside(fitted) };
          expect(holesIn(told)).toEqual([]);
          for (const p of chancesIn(told)) {
            expect(p).toBeGreaterThanOrEqual(0);
            expect(p).toBeLessThanOrEqual(1);
          }
          seen.set(inference.kind, (seen.get(inference.kind) ?? 0) + 1);
        },
      ),
      { numRuns: 600, seed: 10 },
    );
    expect([...seen.keys()].sort()).toEqual(['clustered', 'kenward-roger', 'model', 'wild']);
  });
});
