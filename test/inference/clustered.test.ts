import { checkClustersOf } from '@core/inference/check-clusters';
import { inferenceOf } from '@core/inference/inferred';
import type { ClusterCorrection, Inference, Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import fc from 'fast-check';
import { Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { denseCovariance, denseFreedom, denseOf, denseWishart } from './dense-clusters';
import { fitOf, must, partsOf, planFor, withTable } from './whole-fit';

interface Row {
  readonly y: number;
  readonly x: number;
  readonly z: number;
  readonly n: number;
  readonly g: number;
  readonly h: number;
}

const row = fc.record({
  y: fc.integer({ min: -500, max: 500 }),
  x: fc.integer({ min: -40, max: 40 }),
  z: fc.integer({ min: 0, max: 9 }),
  n: fc.integer({ min: 2, max: 300 }),
  g: fc.integer({ min: 0, max: 5 }),
  h: fc.integer({ min: 0, max: 3 }),
});
/** Cells in up to six clusters of very uneven size, with a second grouping. */
const tables: fc.Arbitrary<readonly Row[]> = fc
  .array(row, { minLength: 9, maxLength: 26 })
  .filter((rows) => new Set(rows.map(({ g }) => g)).size >= 3 && new Set(rows.map(({ h }) => h)).size >= 3);

const corrections: readonly ClusterCorrection[] = ['CR0', 'CR1', 'CR2', 'CR3'];
const terms: Plan['terms'] = [{ column: 'x' }, { column: 'z' }];
const runs = { numRuns: 60, seed: 10 };

function clustered(correction: ClusterCorrection, by: string[] = ['g'], alsoBy: string[] | null = null): Inference {
  return { kind: 'clustered', level: 0.95, correction, by, alsoBy };
}

/** Whether a random design has full rank with some room: a nearly singular one loses digits on either side of a comparison. */
function isSound(rows: readonly Row[]): boolean {
  const design = new Matrix(designOf(rows));
  const gram = design.transpose().mmul(design);
  const scale = Array.from({ length: 3 }, (_, j) => Math.sqrt(gram.get(j, j)));
  const scaled = new Matrix(
    gram.to2DArray().map((r, i) => r.map((v, j) => v / (scale[i] as number) / (scale[j] as number))),
  );
  return scale.every((s) => s > 0) && Math.abs(determinantOf(scaled)) > 1e-3;
}

function determinantOf(m: Matrix): number {
  const [a, b, c, d, e, f, g, h, i] = m.to1DArray() as [
    number,
    number,
    number,
    number,
    number,
    number,
    number,
    number,
    number,
  ];
  return a * (e * i - f * h) - b * (d * i - f * g) + c * (d * h - e * g);
}

/** Weighted by size: whitened rows 1, x, z. */
function designOf(rows: readonly Row[]): number[][] {
  return rows.map(({ x, z, n }) => [1, x, z].map((value) => value * Math.sqrt(n)));
}

function denseFor(rows: readonly Row[], key: (row: Row) => number | string) {
  return denseOf(
    designOf(rows),
    rows.map(({ y, n }) => y * Math.sqrt(n)),
    rows.map(key),
  );
}

function partsFor(
  rows: readonly Row[],
  inference: Inference,
  said: { readonly questions?: Plan['questions']; readonly terms?: Plan['terms'] } = {},
): Pick<Result, 'fit' | 'questions'> {
  const table = Object.fromEntries(
    (['y', 'x', 'z', 'n', 'g', 'h'] as const).map((key) => [key, rows.map((r) => r[key])]),
  );
  const plan = planFor({
    outcome: 'y',
    size: 'n',
    terms: said.terms ?? terms,
    parts: [{ kind: 'per-size', correlation: null }],
    inference,
    questions: said.questions ?? [],
  });
  return partsOf(fitOf(plan, withTable(table)(plan)));
}

function close(found: number | null | undefined, wanted: number, relative: number): void {
  expect(Math.abs((found as number) - wanted)).toBeLessThanOrEqual(relative * Math.max(Math.abs(wanted), 1e-12));
}

describe('clustered errors', () => {
  it.each(corrections)('%s agree with every matrix written out', (correction) => {
    fc.assert(
      fc.property(tables.filter(isSound), (rows) => {
        const dense = denseFor(rows, ({ g }) => g);
        const { fit } = partsFor(rows, clustered(correction));
        const wanted = denseCovariance(dense, correction);
        for (const [i, { se, reference }] of fit.coefficients.entries()) {
          close(se, Math.sqrt(wanted.get(i, i)), 1e-7);
          for (let j = 0; j < 3; j++)
            close(
              (fit.covariance[i]?.[j] as number) / Math.sqrt(wanted.get(i, i) * wanted.get(j, j)) + 2,
              wanted.get(i, j) / Math.sqrt(wanted.get(i, i) * wanted.get(j, j)) + 2,
              1e-7,
            );
          if (correction !== 'CR2') expect(reference).toEqual({ kind: 't', freedom: dense.clusters.length - 1 });
        }
      }),
      runs,
    );
  });

  it('CR2 has the freedom of Bell and McCaffrey for coefficients and for combinations', () => {
    fc.assert(
      fc.property(tables.filter(isSound), fc.integer({ min: -3, max: 3 }), (rows, multiple) => {
        const dense = denseFor(rows, ({ g }) => g);
        const questions: Plan['questions'] = [
          { kind: 'combination', of: { x: 1, z: multiple / 2 }, equals: 0, name: null, family: null },
        ];
        const { fit, questions: answers } = partsFor(rows, clustered('CR2'), { questions });
        for (const [j, { reference }] of fit.coefficients.entries())
          close(
            reference?.freedom,
            denseFreedom(
              dense,
              [0, 1, 2].map((i) => (i === j ? 1 : 0)),
            ),
            1e-6,
          );
        const answer = answers[0]?.answer as { reference: { freedom: number }; se: number };
        const c = [0, 1, multiple / 2];
        close(answer.reference.freedom, denseFreedom(dense, c), 1e-6);
        const column = Matrix.columnVector(c);
        close(
          answer.se,
          Math.sqrt(column.transpose().mmul(denseCovariance(dense, 'CR2')).mmul(column).get(0, 0)),
          1e-7,
        );
      }),
      runs,
    );
  });

  it('joint questions under CR2 have the Wishart freedom of Tipton and Pustejovsky', () => {
    fc.assert(
      fc.property(tables.filter(isSound), (rows) => {
        const dense = denseFor(rows, ({ g }) => g);
        const questions: Plan['questions'] = [{ kind: 'joint', terms: ['x', 'z'], name: null, family: null }];
        const answer = partsFor(rows, clustered('CR2'), { questions }).questions[0]?.answer as {
          statistic: number | null;
          scale: number | null;
          freedom2: number | null;
        };
        const eta = denseWishart(dense, [
          [0, 1, 0],
          [0, 0, 1],
        ]);
        if (eta <= 1.0001) return;
        const v = denseCovariance(dense, 'CR2').selection([1, 2], [1, 2]);
        const b = dense.b.selection([1, 2], [0]);
        const wald = b.transpose().mmul(inverseOf(v)).mmul(b).get(0, 0);
        close(answer.freedom2, eta - 1, 1e-6);
        close(answer.scale, (eta - 1) / eta, 1e-6);
        close(answer.statistic, ((eta - 1) / eta / 2) * wald, 1e-5);
      }),
      runs,
    );
  });

  it('a joint question of one coefficient has the square of its t and the same p value, under every correction', () => {
    fc.assert(
      fc.property(tables.filter(isSound), fc.constantFrom(...corrections), (rows, correction) => {
        const questions: Plan['questions'] = [{ kind: 'joint', terms: ['z'], name: null, family: null }];
        const { fit, questions: answers } = partsFor(rows, clustered(correction), { questions });
        const own = fit.coefficients[2];
        const answer = answers[0]?.answer as { statistic: number; freedom2: number; p: number };
        if (own?.ratio == null) return;
        close(answer.statistic, own.ratio * own.ratio, 1e-9);
        close(answer.freedom2, own.reference?.freedom as number, 1e-9);
        close(answer.p, own.p as number, 1e-7);
      }),
      runs,
    );
  });

  it('of clusters of one cell each are the robust ones: CR0 to CR3 are HC0 to HC3', () => {
    fc.assert(
      fc.property(tables.filter(isSound), (rows) => {
        const alone = rows.map((one, g) => ({ ...one, g }));
        for (const [i, correction] of corrections.entries()) {
          const own = partsFor(alone, clustered(correction)).fit.coefficients;
          const robust = partsFor(alone, {
            kind: 'robust',
            level: 0.95,
            correction: (['HC0', 'HC1', 'HC2', 'HC3'] as const)[i] ?? 'HC0',
          }).fit.coefficients;
          for (const [j, { se }] of own.entries()) close(se, robust[j]?.se as number, 1e-9);
        }
      }),
      runs,
    );
  });

  it('do not depend on the order of the cells, and follow the unit of a column', () => {
    fc.assert(
      fc.property(tables.filter(isSound), fc.constantFrom(...corrections), (rows, correction) => {
        const before = partsFor(rows, clustered(correction)).fit.coefficients;
        const turned = partsFor([...rows].reverse(), clustered(correction)).fit.coefficients;
        const thousand = partsFor(
          rows.map((one) => ({ ...one, x: one.x * 1000 })),
          clustered(correction),
        ).fit.coefficients;
        for (const [j, { se, reference }] of before.entries()) {
          close(turned[j]?.se, se as number, 1e-8);
          close(turned[j]?.reference?.freedom, reference?.freedom as number, 1e-7);
          close((thousand[j]?.se as number) * (j === 1 ? 1000 : 1), se as number, 1e-8);
        }
      }),
      runs,
    );
  });

  it('of many clusters are the same by the power series as by the decomposition', () => {
    const rows = Array.from({ length: 900 }, (_, i) => ({
      y: Math.sin(i * 1.7) * 10 + i / 90,
      x: Math.cos(i * 0.9) * 5 + (i % 7),
      z: (i * 37) % 11,
      n: 5 + ((i * 13) % 50),
      g: (i * i) % 211,
      h: i % 17,
    }));
    const dense = denseFor(rows, ({ g }) => g);
    for (const correction of ['CR2', 'CR3'] as const) {
      const wanted = denseCovariance(dense, correction);
      const { fit } = partsFor(rows, clustered(correction));
      for (const [j, { se }] of fit.coefficients.entries()) close(se, Math.sqrt(wanted.get(j, j)), 1e-10);
    }
    const { fit } = partsFor(rows, clustered('CR2'));
    for (const [j, { reference }] of fit.coefficients.entries())
      close(
        reference?.freedom,
        denseFreedom(
          dense,
          [0, 1, 2].map((i) => (i === j ? 1 : 0)),
        ),
        1e-9,
      );
  }, 120_000);
});

function inverseOf(m: Matrix): Matrix {
  const [a, b, c, d] = m.to1DArray() as [number, number, number, number];
  return new Matrix([
    [d, -b],
    [-c, a],
  ]).mul(1 / (a * d - b * c));
}

describe('errors clustered two ways', () => {
  it.each(['CR0', 'CR1'] as const)(
    '%s are those of each way less those of both, each with its own factor; t on the fewer',
    (correction) => {
      fc.assert(
        fc.property(tables.filter(isSound), (rows) => {
          const { fit } = partsFor(rows, clustered(correction, ['g'], ['h']));
          const [first, second, both] = [
            denseFor(rows, ({ g }) => g),
            denseFor(rows, ({ h }) => h),
            denseFor(rows, ({ g, h }) => `${g} ${h}`),
          ];
          const wanted = Matrix.sub(
            Matrix.add(denseCovariance(first, correction), denseCovariance(second, correction)),
            denseCovariance(both, correction),
          );
          const size = denseCovariance(both, correction);
          for (const [j, { se, p, low, reference }] of fit.coefficients.entries()) {
            const variance = wanted.get(j, j);
            if (Math.abs(variance) < 1e-9 * size.get(j, j)) continue;
            if (variance < 0) expect([se, p, low, reference]).toEqual([null, null, null, null]);
            else {
              close(se, Math.sqrt(variance), 1e-6);
              expect(reference?.freedom).toBe(Math.min(first.clusters.length, second.clusters.length) - 1);
            }
          }
        }),
        runs,
      );
    },
  );

  it('are those of the wider clusters where one grouping lies inside the other', () => {
    fc.assert(
      fc.property(tables.filter(isSound), (rows) => {
        const nested = rows.map((one) => ({ ...one, h: one.g % 3 }));
        if (new Set(nested.map(({ h }) => h)).size < 2) return;
        const both = partsFor(nested, clustered('CR0', ['g'], ['h'])).fit.coefficients;
        const wide = partsFor(nested, clustered('CR0', ['h'])).fit.coefficients;
        for (const [j, { se }] of both.entries())
          if ((wide[j]?.se as number) > 1e-4 * Math.abs(se ?? 0)) close(se, wide[j]?.se as number, 1e-4);
      }),
      runs,
    );
  });
});

describe('clusters that cannot carry errors', () => {
  const rows = Array.from({ length: 12 }, (_, i) => ({ y: (i * i) % 7, x: i, z: i % 5, n: 10, g: i % 4, h: i % 3 }));
  const checkedFor = (inference: Inference, more: Plan['terms'] = [], table: readonly Row[] = rows) => {
    const columns = Object.fromEntries(
      (['y', 'x', 'z', 'n', 'g', 'h'] as const).map((key) => [key, table.map((r) => r[key])]),
    );
    const plan = planFor({
      outcome: 'y',
      size: 'n',
      terms: [...terms, ...more],
      parts: [{ kind: 'per-size', correlation: null }],
      inference,
    });
    const { fitted, cells, design } = fitOf(plan, withTable(columns)(plan));
    const before = checkClustersOf({ plan, design, cells });
    const after = inferenceOf({ fitted, cells, plan });
    return { before, after };
  };

  it('are refused where all cells are one cluster, in each way, under the bootstrap too', () => {
    const one = rows.map((each) => ({ ...each, g: 1 }));
    for (const inference of [
      ...corrections.map((correction) => clustered(correction)),
      { kind: 'wild', level: 0.95, by: ['g'], replications: 99, seed: 1 } satisfies Inference,
    ]) {
      const { before, after } = checkedFor(inference, [], one);
      const refusal = { code: 'too-few-clusters', facts: { by: ['g'], clusters: 1 }, at: '/inference/by' };
      expect(before).toEqual([refusal]);
      expect(after).toEqual({ ok: false, problems: [refusal] });
    }
    const { before } = checkedFor(clustered('CR1', ['h'], ['g']), [], one);
    expect(before).toEqual([{ code: 'too-few-clusters', facts: { by: ['g'], clusters: 1 }, at: '/inference/alsoBy' }]);
  });

  it('are refused by name under CR3 where one decides a coefficient alone; CR2 drops that direction, and its freedom for it is none', () => {
    const more: Plan['terms'] = [{ column: 'g', as: 'category', baseline: null }];
    const { before, after } = checkedFor(clustered('CR3'), more);
    const refusal = {
      code: 'cluster-decides',
      facts: { by: ['g'], group: { g: '0' }, correction: 'CR3' },
      at: '/inference/correction',
    };
    expect(before).toEqual([refusal]);
    expect(after).toEqual({ ok: false, problems: [refusal] });
    const cr2 = must(checkedFor(clustered('CR2'), more).after);
    for (const { se, reference, p } of cr2.coefficients) {
      expect(se).toBeGreaterThanOrEqual(0);
      expect(reference === null || (reference.freedom as number) > 0).toBe(true);
      expect(p === null || (p >= 0 && p <= 1)).toBe(true);
    }
  });

  it('say nothing where as many coefficients as cells leave no residual', () => {
    const few = rows.slice(0, 3).map((one, i) => ({ ...one, z: i * i }));
    for (const correction of corrections) {
      const { before, after } = checkedFor(clustered(correction), [], few);
      expect(before).toEqual([]);
      for (const { se, p, reference } of must(after).coefficients)
        expect([se, p, reference]).toEqual([null, null, null]);
    }
  });
});
