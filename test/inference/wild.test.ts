import { wildVectors } from '@core/inference/wild-vectors';
import type { Inference, Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import fc from 'fast-check';
import { inverse, Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { fitOf, partsOf, planFor, withTable } from './whole-fit';

interface Table {
  readonly y: number[];
  readonly x: number[];
  readonly z: number[];
  readonly n: number[];
  readonly g: number[];
}

/** Cells in a number of clusters, each with at least two cells. */
function tableOf(clusters: number, seed: number): Table {
  const count = clusters * 3;
  const at = (i: number, a: number) => Math.sin((i + 1) * a + seed) * 10;
  return {
    y: Array.from({ length: count }, (_, i) => Math.round(at(i, 1.3) * 10 + at(i % clusters, 2.9) * 5) / 10),
    x: Array.from({ length: count }, (_, i) => Math.round(at(i, 0.7) * 10) / 10),
    z: Array.from({ length: count }, (_, i) => Math.round(at(i % clusters, 4.1) * 10) / 10 + (i % 2)),
    n: Array.from({ length: count }, (_, i) => 3 + Math.round(Math.abs(at(i, 3.3)) * 4)),
    g: Array.from({ length: count }, (_, i) => i % clusters),
  };
}

function wild(replications: number, seed = 1): Inference {
  return { kind: 'wild', level: 0.95, by: ['g'], replications, seed };
}

function partsFor(
  table: Table,
  inference: Inference,
  questions: Plan['questions'] = [],
): Pick<Result, 'fit' | 'questions'> {
  const plan = planFor({
    outcome: 'y',
    size: 'n',
    terms: [{ column: 'x' }, { column: 'z' }],
    parts: [{ kind: 'per-size', correlation: null }],
    inference,
    questions,
  });
  return partsOf(fitOf(plan, withTable(table as unknown as Record<string, number[]>)(plan)));
}

/** The whitened cells of a table. */
function whitened(table: Table): { readonly x: Matrix; readonly y: Matrix } {
  const root = table.n.map(Math.sqrt);
  return {
    x: new Matrix(root.map((r, i) => [r, r * (table.x[i] as number), r * (table.z[i] as number)])),
    y: Matrix.columnVector(root.map((r, i) => r * (table.y[i] as number))),
  };
}

/** b and its CR0 covariance by refitting. */
function refitted(x: Matrix, y: Matrix, clusters: readonly number[]): { readonly b: Matrix; readonly v: Matrix } {
  const bread = inverse(x.transpose().mmul(x));
  const b = bread.mmul(x.transpose()).mmul(y);
  const r = Matrix.sub(y, x.mmul(b));
  const meat = Matrix.zeros(x.columns, x.columns);
  for (const cluster of new Set(clusters)) {
    const own = clusters.flatMap((one, g) => (one === cluster ? [g] : []));
    const score = x
      .selection(own, [0, 1, 2])
      .transpose()
      .mmul(r.selection(own, [0]));
    meat.add(score.mmul(score.transpose()));
  }
  return { b, v: bread.mmul(meat).mmul(bread) };
}

/** Wald statistic of L'b - value under CR0. */
function statistic(fit: ReturnType<typeof refitted>, l: Matrix, value: Matrix): number {
  const off = Matrix.sub(l.transpose().mmul(fit.b), value);
  return off
    .transpose()
    .mmul(inverse(l.transpose().mmul(fit.v).mmul(l)))
    .mmul(off)
    .get(0, 0);
}

/** How many vectors are as far out, by refitting every bootstrap sample. */
function countByRefitting(
  table: Table,
  l: Matrix,
  value: Matrix,
  inference: Extract<Inference, { kind: 'wild' }>,
): number {
  const { x, y } = whitened(table);
  const observed = refitted(x, y, table.g);
  const bread = inverse(x.transpose().mmul(x));
  const middle = inverse(l.transpose().mmul(bread).mmul(l));
  const shift = bread
    .mmul(l)
    .mmul(middle)
    .mmul(Matrix.sub(l.transpose().mmul(observed.b), value));
  const restricted = Matrix.sub(observed.b, shift);
  const residuals = Matrix.sub(y, x.mmul(restricted));
  const fittedValues = x.mmul(restricted);
  const target = statistic(observed, l, value) * (1 - 1e-9) ** 2;
  const vectors = wildVectors({
    clusters: new Set(table.g).size,
    replications: inference.replications,
    seed: inference.seed,
  });
  // Draws go to clusters in the order of their texts.
  const inOrder = [...new Set(table.g)].map(String).sort();
  const places = table.g.map((cluster) => inOrder.indexOf(String(cluster)));
  let count = 0;
  vectors.each((vector) => {
    const sample = Matrix.columnVector(
      fittedValues.to1DArray().map((f, g) => f + (vector[places[g] as number] as number) * residuals.get(g, 0)),
    );
    if (statistic(refitted(x, sample, table.g), l, value) >= target) count++;
    return true;
  });
  return count;
}

const units = [0, 1, 2].map((j) => Matrix.columnVector([0, 1, 2].map((i) => (i === j ? 1 : 0))));

describe('the wild cluster bootstrap on scores', () => {
  it.each([
    ['all sign vectors of 7 clusters', 7, 200],
    ['all vectors of six points, 4 clusters', 4, 2000],
    ['drawn six-point vectors, 9 clusters', 9, 300],
    ['drawn signs, 14 clusters', 14, 300],
  ])('counts what refitting every sample counts: %s', (_, clusters, replications) => {
    for (const seed of [1, 2, 3]) {
      const table = tableOf(clusters, seed);
      const inference = wild(replications, seed) as Extract<Inference, { kind: 'wild' }>;
      const { fit } = partsFor(table, inference);
      for (const [j, unit] of units.entries())
        expect(fit.wild?.[j]?.count).toBe(countByRefitting(table, unit, Matrix.zeros(1, 1), inference));
    }
  });

  it('tests combinations against their value and several coefficients at once in the same way', () => {
    const inference = wild(400) as Extract<Inference, { kind: 'wild' }>;
    const questions: Plan['questions'] = [
      { kind: 'combination', of: { x: 1, z: -2 }, equals: 0.5, name: null, family: 'f' },
      { kind: 'joint', terms: ['x', 'z'], name: null, family: 'f' },
    ];
    for (const seed of [4, 5]) {
      const table = tableOf(8, seed);
      const { questions: answers } = partsFor(table, inference, questions);
      const [combination, joint] = answers.map(({ answer }) => answer) as unknown as {
        p: number;
        low: null;
        statistic: number;
      }[];
      const one = countByRefitting(table, Matrix.columnVector([0, 1, -2]), new Matrix([[0.5]]), inference);
      const both = countByRefitting(
        table,
        new Matrix([
          [0, 0],
          [1, 0],
          [0, 1],
        ]),
        Matrix.zeros(2, 1),
        inference,
      );
      expect(combination?.p).toBe(one / 256);
      expect(combination?.low).toBeNull();
      expect(joint?.p).toBe(both / 256);
      const smaller = Math.min(one, both) / 256;
      expect(Math.min(...answers.map(({ pHolm }) => pHolm as number))).toBeCloseTo(Math.min(1, 2 * smaller), 12);
    }
  });

  it('prints p with its floor, t by CR0, no reference and no interval', () => {
    const { fit } = partsFor(tableOf(6, 1), wild(9999));
    const cr0 = partsFor(tableOf(6, 1), {
      kind: 'clustered',
      level: 0.95,
      correction: 'CR0',
      by: ['g'],
      alsoBy: null,
    }).fit;
    for (const [j, one] of fit.coefficients.entries()) {
      expect(one).toMatchObject({ low: null, high: null, reference: null });
      expect(one.ratio).toBe(cr0.coefficients[j]?.ratio);
      expect(one.p).toBe(fit.wild?.[j]?.p);
      expect(fit.wild?.[j]?.floor).toBe(2 / 64);
      expect(one.p).toBeGreaterThanOrEqual(2 / 64);
    }
  });

  it('gives the same p values from the same seed, and no p below its floor whatever the cells', () => {
    fc.assert(
      fc.property(fc.integer({ min: 2, max: 15 }), fc.integer({ min: 1, max: 400 }), (clusters, seed) => {
        const once = partsFor(tableOf(clusters, seed), wild(199, seed)).fit;
        expect(partsFor(tableOf(clusters, seed), wild(199, seed)).fit.wild).toEqual(once.wild);
        for (const { p, floor } of once.wild ?? []) {
          expect(p).toBeGreaterThanOrEqual(floor);
          expect(p).toBeLessThanOrEqual(1);
        }
      }),
      { numRuns: 30, seed: 3 },
    );
  });

  it('has no p value where the fit is perfect', () => {
    const table = tableOf(6, 2);
    const exact = { ...table, y: table.x.map((x, i) => Math.round((1 + 2 * x - (table.z[i] as number)) * 10) / 10) };
    const { fit } = partsFor(exact, wild(99));
    for (const { p, se } of fit.coefficients) expect([p, se]).toEqual([null, 0]);
    expect(fit.wild).toEqual([]);
  });
});

describe('the vectors of the bootstrap', () => {
  it.each([
    [2, 9999, 'webb', true, 36, 6 / 36],
    [5, 9999, 'webb', true, 7776, 6 / 7776],
    [5, 7775, 'webb', false, 7775, 1 / 7776],
    [6, 64, 'signs', true, 64, 2 / 64],
    [6, 63, 'webb', false, 63, 1 / 64],
    [11, 9999, 'signs', true, 2048, 2 / 2048],
    [11, 2047, 'webb', false, 2047, 1 / 2048],
    [13, 9999, 'signs', true, 8192, 2 / 8192],
    [14, 9999, 'signs', false, 9999, 1 / 10000],
    [5000, 9999, 'signs', false, 9999, 1 / 10000],
  ])('%i clusters, %i replications: %s, all %s, %i of them', (clusters, replications, points, all, count, floor) => {
    const vectors = wildVectors({ clusters, replications, seed: 1 });
    expect(vectors).toMatchObject({ points, all, count, floor });
    if (clusters > 13) return;
    const seen = new Set<string>();
    let visited = 0;
    vectors.each((vector) => {
      visited++;
      seen.add(vector.join());
      return true;
    });
    expect(visited).toBe(count);
    if (all) expect(seen.size).toBe(count);
  });

  it('stop when they are told to', () => {
    let visited = 0;
    wildVectors({ clusters: 20, replications: 1000, seed: 1 }).each(() => ++visited < 10);
    expect(visited).toBe(10);
  });

  it('of drawn signs and of six points have mean 0 and variance 1', () => {
    for (const clusters of [9, 40]) {
      let [sum, squares, drawn] = [0, 0, 0];
      wildVectors({ clusters, replications: 500, seed: 7 }).each((vector) => {
        for (const w of vector) {
          sum += w;
          squares += w * w;
          drawn++;
        }
        return true;
      });
      expect(Math.abs(sum / drawn)).toBeLessThan(0.05);
      expect(Math.abs(squares / drawn - 1)).toBeLessThan(0.03);
    }
  });
});
