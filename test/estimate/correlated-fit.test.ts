import { independent } from '@core/algebra/covariance';
import { fitStructure, underStructure } from '@core/estimate/fit';
import { momentTau2 } from '@core/estimate/moments';
import { omegaAt, type Structure, withFixed } from '@core/model/structure';
import { joinAll, takeStructure } from '@core/model/structure-join';
import { levelPart } from '@core/model/variance-part';
import { fromDoubles } from '@core/numbers/decimals';
import type { Estimate } from '@core/protocol/plan';
import { describe, expect, it } from 'vitest';
import { eliminated, inFull, minus, type Square, times, trace, turned } from './dense-omega';
import { open } from './fitting';
import { drawLinked, type LinkedProblem, linkedKinds, linkedStructure } from './linked-problems';

const designOf = ({ design }: LinkedProblem): Square =>
  Array.from(design.columns[0]?.high ?? [], (_, g) => design.columns.map(({ high }) => high[g] as number));
const columnOf = (values: ArrayLike<number>): Square => Array.from(values, (value) => [value]);

/** C of weights W: (X'WX)^-1 X'W. */
function pullsUnder(X: Square, W: Square): Square {
  const weighed = times(turned(X), W);
  return times(eliminated(times(weighed, X)).inverse, weighed);
}

function near(found: ArrayLike<number>, expected: ArrayLike<number>, share: number): void {
  const size = Math.max(...Array.from(expected, Math.abs));
  for (let i = 0; i < expected.length; i++)
    expect(Math.abs((found[i] as number) - (expected[i] as number))).toBeLessThan(share * size);
}

describe.each(linkedKinds)('a fit of cells tied by %s', (kind) => {
  const problem = drawLinked(3, 40, 3);
  const structure = linkedStructure(kind, problem);
  const estimate: Estimate = { method: 'restricted' };
  const fitted = open(fitStructure({ ...problem, structure, estimate }));
  const X = designOf(problem);
  const omega = inFull(fitted.omega);

  it('is generalised least squares under its Omega, with pulls, errors, residuals and leverages', () => {
    const { inverse } = eliminated(omega);
    const C = pullsUnder(X, inverse);
    near(
      fitted.pulls.flatMap((row) => [...row]),
      C.flat(),
      1e-9,
    );
    near(fitted.coefficients, times(C, columnOf(problem.response.high)).flat(), 1e-9);
    const covariance = times(times(C, omega), turned(C));
    near(
      fitted.covariance.flatMap((row) => [...row]),
      covariance.flat(),
      1e-9,
    );
    near(
      fitted.errors,
      covariance.map((row, j) => Math.sqrt(row[j] as number)),
      1e-9,
    );
    const Q = minus(inverse, times(times(inverse, X), C));
    near(
      fitted.leverages,
      Q.map((row, g) => 1 - (row[g] as number) / (inverse[g]?.[g] as number)),
      1e-8,
    );
    const squares = fitted.whitened.reduce((sum, r) => sum + r * r, 0);
    const left = columnOf(fitted.residuals);
    const expected = (times(times(turned(left), inverse), left)[0] as number[])[0] as number;
    expect(squares / (fitted.scale ?? 1)).toBeCloseTo(expected, 8);
  });

  it('under another target keeps Omega and weights otherwise: C Omega C-transposed', () => {
    const A = Float64Array.from({ length: 40 }, (_, g) => 1 + (g % 5));
    for (const weighting of [independent(A), 'diagonal'] as const) {
      const aside = open(fitStructure({ ...problem, structure, estimate, weighting }));
      expect([...aside.theta]).toEqual([...fitted.theta]);
      const weights = weighting === 'diagonal' ? aside.variances : A;
      const C = pullsUnder(X, inFull(independent(weights.map((a) => 1 / a))));
      near(aside.coefficients, times(C, columnOf(problem.response.high)).flat(), 1e-10);
      near(
        aside.covariance.flatMap((row) => [...row]),
        times(times(C, omega), turned(C)).flat(),
        1e-9,
      );
      near(underStructure(aside).coefficients, fitted.coefficients, 1e-12);
    }
    const own = open(fitStructure({ ...problem, structure, estimate, weighting: fitted.omegaShape }));
    near(own.coefficients, fitted.coefficients, 1e-12);
    near(own.errors, fitted.errors, 1e-9);
  });

  it('by two steps holds the residuals of unweighted least squares', () => {
    const two = open(fitStructure({ ...problem, structure, estimate: { method: 'two-step' } }));
    const { inverse } = eliminated(inFull(two.omega));
    near(two.coefficients, times(pullsUnder(X, inverse), columnOf(problem.response.high)).flat(), 1e-8);
    expect(two.theta.every(Number.isFinite)).toBe(true);
  });
});

describe('moment rules under correlation', () => {
  /** tau^2 by the formulas of the matrices in full. */
  function inMatrices(problem: LinkedProblem, structure: Structure, rule: 'dersimonian-laird' | 'hanushek'): number {
    const X = designOf(problem);
    const y = columnOf(problem.response.high);
    const at = (tau2: number) => {
      const theta = Float64Array.from(structure.parameters, ({ fixed }) => fixed ?? tau2);
      return inFull(omegaAt(structure, theta));
    };
    const S = at(0);
    const R = minus(at(1), S);
    const identity = S.map((row, g) => row.map((_, h) => (g === h ? 1 : 0)));
    const W = rule === 'hanushek' ? identity : eliminated(S).inverse;
    const M = minus(W, times(times(W, X), pullsUnder(X, W)));
    const q = (times(times(turned(y), M), y)[0] as number[])[0] as number;
    return Math.max(0, (q - trace(times(M, S))) / trace(times(M, R)));
  }

  it.each(['between-serial', 'matrix-between'] as const)('are the traces of the matrices: %s', (kind) => {
    for (const seed of [1, 2, 3, 4, 6]) {
      const problem = drawLinked(seed, 30, 2);
      const drawn = linkedStructure(kind, problem);
      const structure = kind === 'between-serial' ? withFixed(drawn, 'rho: between', 0.4) : drawn;
      for (const rule of ['dersimonian-laird', 'hanushek'] as const) {
        const expected = inMatrices(problem, structure, rule);
        expect(Math.abs(momentTau2({ ...problem, structure }, rule) - expected)).toBeLessThan(1e-9 * (expected + 1));
      }
      const paule = momentTau2({ ...problem, structure }, 'paule-mandel');
      const theta = Float64Array.from(structure.parameters, ({ fixed }) => fixed ?? paule);
      const W = eliminated(inFull(omegaAt(structure, theta))).inverse;
      const X = designOf(problem);
      const y = columnOf(problem.response.high);
      const M = minus(W, times(times(W, X), pullsUnder(X, W)));
      const q = (times(times(turned(y), M), y)[0] as number[])[0] as number;
      if (paule > 0) expect(q).toBeCloseTo(28, 8);
      else expect(q).toBeLessThanOrEqual(28);
    }
  });
});

describe('a matrix of no more degrees of freedom than cells', () => {
  const problem = drawLinked(4, 20, 2);
  /** Rank 9: nine vectors that the cells share. */
  const entries = (() => {
    const cells = 20;
    const vectors = Array.from({ length: 9 }, (_, l) =>
      Float64Array.from({ length: cells }, (__, g) => Math.sin((l + 1) * (g + 2)) * (problem.errors[g] as number)),
    );
    return Float64Array.from({ length: cells * cells }, (_, at) =>
      vectors.reduce((sum, v) => sum + (v[Math.floor(at / cells)] as number) * (v[at % cells] as number), 0),
    );
  })();
  const structureWith = (scale: 'fixed' | 'free', between = false): Structure =>
    joinAll({
      parts: [
        levelPart({
          kind: 'matrix',
          parameter: scale === 'free' ? { name: 'phi', role: 'scale' } : null,
          base: Float64Array.from({ length: 20 }, (_, g) => entries[g * 21] as number),
          link: { kind: 'matrix', entries, inverted: false },
        }),
        ...(between
          ? [
              levelPart({
                kind: 'between',
                parameter: { name: 'tau2', role: 'between' },
                base: new Float64Array(20).fill(1),
                link: null,
              }),
            ]
          : []),
      ],
      fixed: {},
    });
  const X = designOf(problem);
  const V = inFull(omegaAt(structureWith('fixed'), new Float64Array(0)));
  const D = inFull(independent(Float64Array.from(V, (row, g) => 1 / (row[g] as number))));
  const C = pullsUnder(X, D);

  it('weighs by its diagonal and has the errors of the whole of it', () => {
    const fitted = open(
      fitStructure({ ...problem, structure: structureWith('fixed'), estimate: { method: 'least-squares' } }),
    );
    near(fitted.coefficients, times(C, columnOf(problem.response.high)).flat(), 1e-11);
    near(
      fitted.covariance.flatMap((row) => [...row]),
      times(times(C, V), turned(C)).flat(),
      1e-11,
    );
    expect(fitted.targetIsStructure).toBe(false);
    near(underStructure(fitted).coefficients, fitted.coefficients, 1e-15);
    expect(takeStructure(structureWith('fixed'), [0, 1, 2]).byDiagonal).toBe(true);
  });

  it('has its free scale from what the weighted squares are expected to be, never from an inverse', () => {
    const fitted = open(
      fitStructure({ ...problem, structure: structureWith('free'), estimate: { method: 'least-squares' } }),
    );
    const M = minus(D, times(times(D, X), C));
    const y = columnOf(problem.response.high);
    const q = (times(times(turned(y), M), y)[0] as number[])[0] as number;
    expect(fitted.scale).toBeCloseTo(q / trace(times(M, V)), 10);
  });

  it('beside tau^2 is fitted by moments and refused to likelihoods', () => {
    const structure = structureWith('fixed', true);
    const M = minus(D, times(times(D, X), C));
    const y = columnOf(problem.response.high);
    const q = (times(times(turned(y), M), y)[0] as number[])[0] as number;
    const expected = Math.max(0, (q - trace(times(M, V))) / trace(M));
    const byMoments = fitStructure({
      ...problem,
      structure,
      estimate: { method: 'moments', rule: 'dersimonian-laird' },
    });
    expect(open(byMoments).theta[0]).toBeCloseTo(expected, 9);
    const paule = open(fitStructure({ ...problem, structure, estimate: { method: 'moments', rule: 'paule-mandel' } }));
    expect(Number.isFinite(paule.theta[0])).toBe(true);
    const likely = fitStructure({ ...problem, structure, estimate: { method: 'restricted' } });
    expect(likely).toMatchObject({ ok: false, problems: [{ code: 'not-together' }] });
  });
});

it('cells as many as coefficients, and one more, under a given matrix: no residuals, then one', () => {
  for (const cells of [3, 4]) {
    const problem = drawLinked(8, cells, 3);
    const structure = linkedStructure('matrix-free', problem);
    const fitted = open(fitStructure({ ...problem, structure, estimate: { method: 'least-squares' } }));
    expect(fitted.residualFreedom).toBe(cells - 3);
    expect(Number.isNaN(fitted.scale as number)).toBe(cells === 3);
    const likely = fitStructure({ ...problem, structure, estimate: { method: 'restricted' } });
    expect(likely.ok).toBe(cells === 4);
  }
});

it('sizes over twelve orders of magnitude beside a shared shock: cells with next to no variance of their own keep their digits', () => {
  const cells = 24;
  const problem = drawLinked(9, cells, 2);
  const sizes = Float64Array.from({ length: cells }, (_, g) => 10 ** ((12 * g) / (cells - 1)));
  const structure = linkedStructure('shared', { ...problem, sizes });
  const fitted = open(
    fitStructure({
      ...problem,
      response: fromDoubles(problem.response.high),
      structure,
      estimate: { method: 'restricted' },
    }),
  );
  expect(fitted.coefficients.every(Number.isFinite) && fitted.errors.every((error) => error > 0)).toBe(true);
});
