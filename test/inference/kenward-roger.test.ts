import type { Plan } from '@core/protocol/plan';
import { inverse, Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { type Fit, fitOf, partsOf, planFor, withTable } from './whole-fit';

type Parts = Plan['variance']['parts'];

/** Twenty-four cells in six groups of four, with sizes, errors and an order. */
const table = {
  y: Array.from(
    { length: 24 },
    (_, i) => Math.round((Math.sin(i * 1.9) * 4 + Math.cos((i % 6) * 2.3) * 3 + i / 6) * 100) / 100,
  ),
  x: Array.from({ length: 24 }, (_, i) => Math.round(Math.sin(i * 0.8) * 50) / 10),
  z: Array.from({ length: 24 }, (_, i) => (i % 6) % 3),
  n: Array.from({ length: 24 }, (_, i) => 4 + ((i * 7) % 31)),
  s: Array.from({ length: 24 }, (_, i) => 0.5 + ((i * 5) % 11) / 6),
  g: Array.from({ length: 24 }, (_, i) => i % 6),
};

const perSize = { kind: 'per-size', correlation: null } as const;
const between = { kind: 'between', correlation: null } as const;
const given = { kind: 'given', scale: 'fixed', freedom: null, correlation: null } as const;

function fitFor(parts: Parts, fixed: Record<string, number> = {}, y = table.y): Fit {
  const plan = planFor({
    outcome: 'y',
    size: 'n',
    error: 's',
    terms: [{ column: 'x' }, { column: 'z', as: 'category', baseline: null }],
    parts,
    fixed,
    estimate: { method: 'restricted' },
    inference: { kind: 'kenward-roger', level: 0.95 },
    questions: [
      { kind: 'joint', terms: ['z'], name: null, family: null },
      { kind: 'joint', terms: ['x'], name: null, family: null },
      { kind: 'combination', of: { x: 1, 'z: 2': -1 }, equals: 0, name: null, family: null },
    ],
  });
  return fitOf(plan, withTable({ ...table, y })(plan));
}

/** Omega written out as a function of parameters in which it is linear. */
type Omega = (theta: readonly number[]) => Matrix;

const eye = Matrix.eye(24);
const bySize = Matrix.diag(table.n.map((n) => 1 / n));
const byError = Matrix.diag(table.s.map((s) => s * s));
const same = new Matrix(table.g.map((a) => table.g.map((b) => (a === b ? 1 : 0))));

/** Kenward and Roger's formulas with P_i, Q_ij and the information as written, and derivatives of Omega by differences. */
function byDefinition(omega: Omega, theta: readonly number[], design: Matrix) {
  const q = theta.length;
  const v = inverse(omega(theta));
  const step = theta.map((t) => Math.max(Math.abs(t), 1) / 2);
  const slopes = theta.map((_, i) =>
    Matrix.sub(omega(theta.map((t, j) => (i === j ? t + (step[i] as number) : t))), omega(theta)).mul(
      1 / (step[i] as number),
    ),
  );
  const phi = inverse(design.transpose().mmul(v).mmul(design));
  const right = v.mmul(design);
  const p = slopes.map((s) => right.transpose().mmul(s).mmul(right).mul(-1));
  const qq = slopes.map((a) => slopes.map((b) => right.transpose().mmul(a).mmul(v).mmul(b).mmul(right)));
  const m = Matrix.sub(v, right.mmul(phi).mmul(right.transpose()));
  const information = new Matrix(slopes.map((a) => slopes.map((b) => m.mmul(a).mmul(m).mmul(b).trace() / 2)));
  const w = inverse(information);
  const inner = Matrix.zeros(design.columns, design.columns);
  for (let i = 0; i < q; i++)
    for (let j = 0; j < q; j++)
      inner.add(Matrix.sub(qq[i]?.[j] as Matrix, (p[i] as Matrix).mmul(phi).mmul(p[j] as Matrix)).mul(w.get(i, j)));
  const adjusted = Matrix.add(phi, phi.mmul(inner).mmul(phi).mul(2));
  const freedomOf = (c: readonly number[]) => {
    const column = Matrix.columnVector([...c]);
    const quadratic = (a: Matrix) => column.transpose().mmul(a).mmul(column).get(0, 0);
    const gradient = Matrix.columnVector(p.map((own) => -quadratic(phi.mmul(own).mmul(phi))));
    return (2 * quadratic(phi) ** 2) / gradient.transpose().mmul(w).mmul(gradient).get(0, 0);
  };
  return { adjusted, freedomOf };
}

function designOf({ design }: Fit): Matrix {
  return new Matrix(design.columns.map(({ high }) => Array.from(high))).transpose();
}

const structures: readonly {
  readonly name: string;
  readonly parts: Parts;
  readonly omega: (fit: Fit) => [Omega, number[]];
}[] = [
  {
    name: 'per-size + between',
    parts: [perSize, between],
    omega: ({ fitted }) => [
      ([phi, tau2]) => Matrix.add(Matrix.mul(bySize, phi as number), Matrix.mul(eye, tau2 as number)),
      Array.from(fitted.theta),
    ],
  },
  {
    name: 'given + between',
    parts: [given, between],
    omega: ({ fitted }) => [([tau2]) => Matrix.add(byError, Matrix.mul(eye, tau2 as number)), Array.from(fitted.theta)],
  },
  {
    name: 'a free scale alone',
    parts: [perSize],
    omega: ({ fitted }) => [([phi]) => Matrix.mul(bySize, phi as number), Array.from(fitted.theta)],
  },
  {
    name: 'per-size + shared',
    parts: [perSize, { kind: 'shared', by: ['g'] }],
    omega: ({ fitted }) => [
      ([phi, omega2]) => Matrix.add(Matrix.mul(bySize, phi as number), Matrix.mul(same, omega2 as number)),
      Array.from(fitted.theta),
    ],
  },
  {
    name: 'given + between, exchangeable in groups (in tau2 and tau2 rho)',
    parts: [given, { kind: 'between', correlation: { kind: 'exchangeable', by: ['g'] } }],
    omega: ({ fitted }) => [
      ([tau2, both]) =>
        Matrix.add(
          byError,
          Matrix.add(Matrix.mul(eye, tau2 as number), Matrix.mul(Matrix.sub(same, eye), both as number)),
        ),
      [fitted.theta[0] as number, (fitted.theta[0] as number) * (fitted.theta[1] as number)],
    ],
  },
  {
    name: 'per-size, exchangeable in groups (in phi and phi rho)',
    parts: [{ kind: 'per-size', correlation: { kind: 'exchangeable', by: ['g'] } }],
    omega: ({ fitted }) => {
      const root = Matrix.diag(table.n.map((n) => 1 / Math.sqrt(n)));
      const off = root.mmul(Matrix.sub(same, eye)).mmul(root);
      return [
        ([phi, both]) => Matrix.add(Matrix.mul(bySize, phi as number), Matrix.mul(off, both as number)),
        [fitted.theta[0] as number, (fitted.theta[0] as number) * (fitted.theta[1] as number)],
      ];
    },
  },
];

describe('Kenward and Roger', () => {
  it.each(structures)('agrees with the formulas as they are written: $name', ({ parts, omega }) => {
    const fit = fitFor(parts);
    const [of, theta] = omega(fit);
    const wanted = byDefinition(of, theta, designOf(fit));
    const { fit: found, questions } = partsOf(fit);
    for (const [i, row] of found.covariance.entries())
      for (const [j, value] of row.entries()) expect(value).toBeCloseTo(wanted.adjusted.get(i, j), 9);
    const k = found.coefficients.length;
    for (const [j, { se, reference }] of found.coefficients.entries()) {
      expect(se).toBeCloseTo(Math.sqrt(wanted.adjusted.get(j, j)), 9);
      expect(
        (reference?.freedom as number) / wanted.freedomOf(Array.from({ length: k }, (_, i) => (i === j ? 1 : 0))),
      ).toBeCloseTo(1, 8);
    }
    const combination = questions[2]?.answer as { reference: { freedom: number } };
    expect(combination.reference.freedom / wanted.freedomOf([0, 1, 0, -1])).toBeCloseTo(1, 8);
  });

  it('is the model’s own with t and F on G - k where a scale is all that is unknown', () => {
    const { fit, questions } = partsOf(fitFor([perSize]));
    const model = fitFor([perSize]).fitted.errors;
    for (const [j, { se, reference }] of fit.coefficients.entries()) {
      expect((se as number) / (model[j] as number)).toBeCloseTo(1, 12);
      expect(reference?.freedom).toBeCloseTo(20, 8);
    }
    const joint = questions[0]?.answer as { scale: number; freedom2: number };
    expect(joint.scale).toBeCloseTo(1, 10);
    expect(joint.freedom2).toBeCloseTo(20, 8);
  });

  it('a joint question of one coefficient is the square of its t, the scale 1', () => {
    for (const { parts } of structures) {
      const { fit, questions } = partsOf(fitFor(parts));
      const joint = questions[1]?.answer as { statistic: number; scale: number; freedom2: number; p: number };
      const own = fit.coefficients[1];
      expect(joint.statistic / ((own?.ratio as number) * (own?.ratio as number))).toBeCloseTo(1, 9);
      expect(joint.scale).toBe(1);
      expect(joint.freedom2 / (own?.reference?.freedom as number)).toBeCloseTo(1, 9);
      expect(joint.p / (own?.p as number)).toBeCloseTo(1, 7);
    }
  });

  it('keeps a boundary parameter in, at the expected information there', () => {
    // Residuals far smaller than the given errors: tau2 ends at 0.
    const fit = fitFor(
      [given, between],
      {},
      table.x.map((x, i) => Math.round((x + Math.sin(i) / 9) * 1000) / 1000),
    );
    expect(fit.fitted.theta[0]).toBe(0);
    const wanted = byDefinition(([tau2]) => Matrix.add(byError, Matrix.mul(eye, tau2 as number)), [0], designOf(fit));
    const { fit: found } = partsOf(fit);
    for (const [j, { se, reference }] of found.coefficients.entries()) {
      expect(se).toBeCloseTo(Math.sqrt(wanted.adjusted.get(j, j)), 9);
      expect(se).toBeGreaterThan(fit.fitted.errors[j] as number);
      expect(reference?.kind).toBe('t');
    }
  });

  it('keeps the product with a correlation in where the variance of its part ends at 0', () => {
    const parts: Parts = [given, { kind: 'between', correlation: { kind: 'exchangeable', by: ['g'] } }];
    const fit = fitFor(
      parts,
      {},
      table.x.map((x, i) => Math.round((x + Math.sin(i) / 9) * 1000) / 1000),
    );
    expect(fit.fitted.theta[0]).toBe(0);
    const off = Matrix.sub(same, eye);
    const omega: Omega = ([tau2, both]) =>
      Matrix.add(byError, Matrix.add(Matrix.mul(eye, tau2 as number), Matrix.mul(off, both as number)));
    const wanted = byDefinition(omega, [0, 0], designOf(fit));
    for (const [j, { se }] of partsOf(fit).fit.coefficients.entries())
      expect(se).toBeCloseTo(Math.sqrt(wanted.adjusted.get(j, j)), 9);
  });

  it('is the model’s own on the normal where every parameter is fixed', () => {
    const { fit, questions } = partsOf(fitFor([given, between], { tau2: 1 }));
    for (const { reference } of fit.coefficients) expect(reference).toEqual({ kind: 'normal', freedom: null });
    expect(questions[0]?.answer).toMatchObject({ scale: null, freedom2: null });
  });

  it('follows the units of outcome and columns', () => {
    for (const { parts } of structures.filter(({ parts }) => parts[0]?.kind !== 'given')) {
      const before = partsOf(fitFor(parts)).fit.coefficients;
      const after = partsOf(
        fitFor(
          parts,
          {},
          table.y.map((y) => y * 1000),
        ),
      ).fit.coefficients;
      for (const [j, { se, reference, p }] of before.entries()) {
        expect((after[j]?.se as number) / (se as number) / 1000).toBeCloseTo(1, 8);
        expect((after[j]?.reference?.freedom as number) / (reference?.freedom as number)).toBeCloseTo(1, 7);
        expect((after[j]?.p as number) / (p as number)).toBeCloseTo(1, 6);
      }
    }
  });
});
