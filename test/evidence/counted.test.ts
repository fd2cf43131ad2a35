import { onOwnScale, ownScaleAnswer } from '@core/figures/own-scale';
import { workingValues } from '@core/figures/working-values';
import { normalUpperQuantile } from '@core/numbers/distributions';
import type { Result } from '@core/protocol/result';
import { reportOf } from '@core/report/report-of';
import { describe, expect, it } from 'vitest';
import { answered, refusedOrWhole, runOn, type Said } from '../engine/hostile';

const columns = {
  town: ['a', 'b', 'c', 'd', 'e', 'f', 'g', 'h', 'i', 'j'],
  x: [0, 1, 2, 3, 4, 5, 6, 7, 8, 9],
  n: [40, 90, 25, 60, 33, 80, 51, 44, 120, 70],
  e: [40, 90, 25, 60, 33, 80, 51, 44, 120, 70],
  c: [3, 14, 4, 15, 9, 30, 17, 20, 66, 40],
  p: [0.075, 0.15, 0.16, 0.25, 0.27, 0.375, 0.33, 0.45, 0.55, 0.57],
  se: [0.04, 0.04, 0.07, 0.06, 0.08, 0.05, 0.07, 0.07, 0.05, 0.06],
};
const shares = { roles: { label: ['town'], count: 'c', size: 'n' }, terms: [{ column: 'x' }] };
const logit: Said = {
  ...shares,
  outcomeScale: 'logit',
  estimate: { method: 'full' },
  variance: { parts: [{ kind: 'binomial', scale: 'free' }] },
};
const rates: Said = {
  roles: { label: ['town'], count: 'c', exposure: 'e', per: 100 },
  terms: [{ column: 'x' }],
  outcomeScale: 'log',
  variance: { parts: [{ kind: 'counts', scale: 'free' }] },
};
const identity: Said = { ...shares, variance: { parts: [{ kind: 'binomial', scale: 'free' }] } };
const fits: readonly [string, Said][] = [
  ['logit', logit],
  ['log of rates', rates],
  ['identity', identity],
];

function phiOf({ fit }: Result): number {
  return fit.variance.find(({ name }) => name === 'phi')?.estimate as number;
}

describe('what hangs on a fit of counts', () => {
  it.each(fits)(
    '%s: cells stand in shares or rates, and whitened residuals are residuals over stated deviations',
    (_, said) => {
      const result = answered(runOn(columns, said));
      const counted =
        said === rates
          ? (g: number) => (100 * (columns.c[g] as number)) / (columns.e[g] as number)
          : (g: number) => (columns.c[g] as number) / (columns.n[g] as number);
      for (const [g, cell] of result.cells.entries()) {
        expect(cell.observed).toBeCloseTo(counted(g), 12);
        expect(cell.residual).toBeCloseTo(cell.observed - cell.fitted, 12);
        expect(cell.whitened).toBeCloseTo(cell.residual / Math.sqrt(cell.variance / phiOf(result)), 10);
        expect(cell.weight * cell.variance).toBeCloseTo(phiOf(result), 10);
      }
      const variance = (mu: number, g: number) =>
        said === rates ? (mu * 100) / (columns.e[g] as number) : (mu * (1 - mu)) / (columns.n[g] as number);
      for (const [g, cell] of result.cells.entries())
        expect(cell.variance / phiOf(result) / variance(cell.fitted, g)).toBeCloseTo(1, 10);
    },
  );

  it.each(fits)(
    '%s: pulls times working values are the coefficients, and what rivals move sums to the difference',
    (_, said) => {
      const result = answered(
        runOn(columns, { ...said, beside: ['constant', ...(said === rates ? [] : ['per-size'])] }),
      );
      const values = workingValues(result);
      for (const [j, { pulls }] of result.beam.entries()) {
        const sum = pulls.reduce((total, pull, g) => total + pull * (values[g] as number), 0);
        expect(sum).toBeCloseTo(result.fit.coefficients[j]?.estimate as number, 10);
      }
      for (const rival of result.beside) {
        for (const [j, { byCell }] of rival.moved.entries()) {
          const moved = (rival.coefficients[j]?.estimate as number) - (result.fit.coefficients[j]?.estimate as number);
          expect(byCell.reduce((sum, value) => sum + value, 0)).toBeCloseTo(moved, 9);
        }
        for (const { cost } of rival.price) expect(cost).toBeGreaterThan(-1e-12);
      }
    },
  );

  it('under a link no likelihood is told of rivals, no exponent is scanned, and the deviance stands in place of a weighted R squared', () => {
    const result = answered(
      runOn(columns, { ...logit, beside: ['constant', 'per-size', { parts: [{ kind: 'binomial', scale: 'fixed' }] }] }),
    );
    expect(
      result.beside.map(({ logLikelihood, restrictedLogLikelihood }) => [logLikelihood, restrictedLogLikelihood]),
    ).toEqual([
      [null, null],
      [null, null],
      [null, null],
    ]);
    expect([result.exponentScan, result.exponentSupport]).toEqual([[], null]);
    expect([result.fit.rSquared.weighted, result.fit.rSquared.adjusted]).toEqual([null, null]);
    expect(result.fit.rSquared.raw).toBeGreaterThan(0.9);
    expect(result.fit.deviance).toBeGreaterThan(0);
    // The rival of the same part, at a fixed scale: the same weights, and so the same coefficients at no cost.
    expect(result.beside[2]?.coefficients.map(({ estimate }) => estimate)).toEqual(
      result.fit.coefficients.map(({ estimate }) => estimate),
    );
    for (const { cost } of result.beside[2]?.price ?? []) expect(cost).toBeCloseTo(0, 12);
  });

  it('a rival by given errors under a link has them over the slope at the fitted mean', () => {
    const said = { ...logit, roles: { ...shares.roles, error: 'se' }, beside: ['given'] };
    const { beside, cells } = answered(runOn(columns, said));
    const phi = beside[0]?.parameters[0]?.estimate as number;
    for (const [g] of cells.entries())
      expect((beside[0]?.variances[g] as number) / phi).toBeCloseTo((columns.se[g] as number) ** 2, 12);
  });

  it('robust errors under logit are the sandwich of the scores, worked out by hand', () => {
    const result = answered(runOn(columns, { ...logit, inference: { kind: 'robust', correction: 'HC0' } }));
    const mu = result.cells.map(({ fitted }) => fitted);
    const sums = [0, 0, 0];
    const meat = [0, 0, 0];
    for (const [g, m] of mu.entries()) {
      const [n, x] = [columns.n[g] as number, columns.x[g] as number];
      const [w, u] = [n * m * (1 - m), (columns.c[g] as number) - n * m];
      for (const [i, power] of [1, x, x * x].entries()) {
        sums[i] = (sums[i] as number) + w * power;
        meat[i] = (meat[i] as number) + u * u * power;
      }
    }
    const [a, b, c] = sums as [number, number, number];
    const [p, q, r] = meat as [number, number, number];
    const variance = (b * b * p - 2 * a * b * q + a * a * r) / (a * c - b * b) ** 2;
    expect(result.fit.coefficients[1]?.se).toBeCloseTo(Math.sqrt(variance), 10);
  });

  it('expectations say what a new cell of a size would show, on the scale of the fit and on the own one', () => {
    const said = {
      ...logit,
      variance: { parts: [{ kind: 'binomial', scale: 'fixed' }] },
      questions: [
        { kind: 'expect', where: { x: 4 }, size: 50 },
        { kind: 'combination', of: { x: 2 } },
      ],
    };
    const result = answered(runOn(columns, said));
    const [first, second] = result.questions;
    const answer = first?.answer as Extract<Result['questions'][number]['answer'], { fitted: unknown }>;
    const mu = 1 / (1 + Math.exp(-answer.fitted.estimate));
    expect(answer.newCellObserved?.se).toBeCloseTo(
      Math.hypot(answer.fitted.se as number, 1 / Math.sqrt(50 * mu * (1 - mu))),
      12,
    );
    expect((answer.fitted.high as number) - answer.fitted.estimate).toBeCloseTo(
      normalUpperQuantile(0.025) * (answer.fitted.se as number),
      12,
    );
    expect(onOwnScale(result.plan, answer.fitted)?.estimate).toBeCloseTo(mu, 12);
    expect(ownScaleAnswer(result, first as Result['questions'][number])).toMatch(
      /On the scale of c \/ n itself that is 0\.\d+ \(95.% interval .*The observed mean of a new cell of size 50 is/,
    );
    expect(ownScaleAnswer(result, second as Result['questions'][number])).toMatch(
      /^The odds of c \/ n are multiplied by/,
    );
  });

  it('an expectation of a rate takes its exposure from what the question states', () => {
    const asked = {
      ...rates,
      questions: [
        { kind: 'expect', where: { x: 4, e: 200 } },
        { kind: 'expect', where: { x: 4 } },
      ],
    };
    const result = answered(runOn(columns, asked));
    const answers = result.questions.map(({ answer }) => answer as Extract<typeof answer, { fitted: unknown }>);
    const mu = Math.exp(answers[0]?.fitted.estimate as number);
    const own = (phiOf(result) * 100) / (mu * 200);
    expect(answers[0]?.newCellObserved?.se).toBeCloseTo(Math.sqrt((answers[0]?.fitted.se as number) ** 2 + own), 12);
    expect(answers[1]?.newCellObserved).toBeNull();
  });

  it('the report says how the fit was found, what the equation is of, and why no likelihood is compared', () => {
    const result = answered(runOn(columns, { ...logit, beside: ['constant'] }));
    const text = JSON.stringify(reportOf({ result, edition: null }).blocks);
    for (const said of [
      'logit(μ) = ',
      'maximum likelihood of the counts, with the logit of the mean on the terms',
      'They weight the working response of the stated fit',
      'deviance',
      'Coefficients are differences of logits',
      'The odds of c / n are multiplied by',
    ])
      expect(text).toContain(said);
    expect(text).not.toContain('weighted R²');
    expect(JSON.stringify(reportOf({ result: answered(runOn(columns, identity)), edition: null }).blocks)).toContain(
      'both were iterated until nothing changed',
    );
  });
});

describe('shares and rates on a transformed scale', () => {
  it('under logit a given error is divided by p (1 - p), in percent alike', () => {
    const given = {
      roles: { label: ['town'], outcome: 'p', outcomeUnit: 'share', error: 'se' },
      terms: shares.terms,
      outcomeScale: 'logit',
      variance: { parts: [{ kind: 'given', scale: 'fixed' }] },
    };
    const result = answered(runOn(columns, given));
    for (const [g, { variance, observed }] of result.cells.entries()) {
      const p = columns.p[g] as number;
      expect(observed).toBeCloseTo(Math.log(p / (1 - p)), 12);
      expect(Math.sqrt(variance)).toBeCloseTo((columns.se[g] as number) / p / (1 - p), 12);
    }
    const inPercent = {
      ...columns,
      p: columns.p.map((p) => Number((100 * p).toFixed(6))),
      se: columns.se.map((se) => 100 * se),
    };
    const percent = answered(runOn(inPercent, { ...given, roles: { ...given.roles, outcomeUnit: 'percent' } }));
    for (const [j, one] of percent.fit.coefficients.entries()) {
      expect(one.estimate).toBeCloseTo(result.fit.coefficients[j]?.estimate as number, 12);
      expect(one.se).toBeCloseTo(result.fit.coefficients[j]?.se as number, 12);
    }
    expect(result.cautions.find(({ code }) => code === 'errors-from-outcome')?.facts).toEqual({ cause: 'logit' });
  });

  it('a share of 0 with a size is a count that takes its half; without a size it is refused', () => {
    const said = {
      roles: { label: ['town'], outcome: 'p', outcomeUnit: 'share', size: 'n' },
      terms: shares.terms,
      outcomeScale: 'logit',
      variance: { parts: [{ kind: 'binomial', scale: 'fixed' }] },
    };
    const extreme = { ...columns, p: columns.p.with(0, 0).with(9, 1) };
    const { cells } = answered(runOn(extreme, said));
    expect(cells[0]?.observed).toBeCloseTo(Math.log(0.5 / 40.5), 12);
    expect(cells[9]?.observed).toBeCloseTo(Math.log(70.5 / 0.5), 12);
    expect(cells[0]?.variance).toBeCloseTo(1 / ((41 * 0.5 * 40.5) / 41 ** 2), 10);
    const bare = {
      ...said,
      roles: { label: ['town'], outcome: 'p', outcomeUnit: 'share' },
      variance: { parts: [{ kind: 'constant' }] },
    };
    expect(refusedOrWhole(runOn(extreme, bare))).toEqual(['transform-undefined']);
    expect(refusedOrWhole(runOn(columns, { ...bare, addedHalf: 'all-cells' }))).toEqual(['role-needed']);
  });

  it('the log of a mean is told only where a logarithm of means is taken', () => {
    const codes = (said: Said) => answered(runOn(columns, said)).cautions.map(({ code }) => code);
    expect(codes(rates)).not.toContain('log-of-means');
    expect(codes({ ...rates, variance: { parts: [{ kind: 'constant' }] } })).toContain('log-of-means');
  });
});
