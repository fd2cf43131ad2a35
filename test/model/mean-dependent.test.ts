import {
  curvatureOf,
  heightOf,
  type MeanDependent,
  meansAt,
  outsideRange,
  predictorOf,
  samplingAt,
} from '@core/model/mean-dependent';
import { describe, expect, it } from 'vitest';

const observed = Float64Array.of(0, 0.2, 0.55, 1, 0.9);
const part = (change: Partial<MeanDependent>): MeanDependent => ({
  kind: 'binomial',
  scale: 'logit',
  observed,
  amounts: Float64Array.of(10, 25, 4, 7, 100),
  whole: 1,
  asCounted: true,
  labels: ['a', 'b', 'c', 'd', 'e'],
  ...change,
});

const families: readonly [string, MeanDependent, Float64Array][] = [
  ['binomial, identity', part({ scale: 'identity' }), Float64Array.of(0.02, 0.3, 0.5, 0.97, 0.8)],
  ['binomial, logit', part({}), Float64Array.of(-4, -1, 0.2, 3, 2)],
  ['binomial, log', part({ scale: 'log' }), Float64Array.of(-4, -1.2, -0.7, -0.05, -0.2)],
  ['counts, identity', part({ kind: 'counts', scale: 'identity' }), Float64Array.of(0.1, 0.3, 0.5, 1.4, 0.8)],
  ['counts, log', part({ kind: 'counts', scale: 'log' }), Float64Array.of(-2, -1.2, -0.7, 0.3, 0.1)],
];

/** The height of one cell alone, as a function of its own predictor. */
function ownHeight(of: MeanDependent, g: number, eta: number): number {
  const one = { ...of, observed: observed.slice(g, g + 1), amounts: of.amounts.slice(g, g + 1) };
  const predictor = Float64Array.of(eta);
  return heightOf(one, predictor, meansAt(one, predictor));
}

describe('a part that follows from fitted means', () => {
  it.each(families)(
    '%s: scores are the derivatives of the likelihood by each cell, numerically',
    (_, of, predictor) => {
      const { scores } = curvatureOf(of, meansAt(of, predictor));
      for (const [g, eta] of predictor.entries()) {
        const step = 1e-5;
        const slope = (ownHeight(of, g, eta + step) - ownHeight(of, g, eta - step)) / (2 * step);
        expect(Math.abs((scores[g] as number) - slope)).toBeLessThan(1e-6 * (1 + Math.abs(slope)));
      }
    },
  );

  it.each(families)(
    '%s: weights are the observed information where that is not below a hundredth of the expected',
    (_, of, predictor) => {
      const means = meansAt(of, predictor);
      const { weights } = curvatureOf(of, means);
      const expected = samplingAt(of, means).map((v) => 1 / v);
      for (const [g, eta] of predictor.entries()) {
        const step = 1e-4 * Math.max(0.1, Math.abs(eta));
        const [up, at, down] = [eta + step, eta, eta - step].map((x) => ownHeight(of, g, x)) as [
          number,
          number,
          number,
        ];
        const curved = -(up - 2 * at + down) / (step * step);
        const taken = Math.max(curved, 0.01 * (expected[g] as number));
        expect(Math.abs((weights[g] as number) / taken - 1)).toBeLessThan(1e-3);
      }
    },
  );

  it.each(families)('%s: slopes are those of the mean, and predictors come back from means', (_, of, predictor) => {
    const { means, slopes, rest } = meansAt(of, predictor);
    const up = meansAt(
      of,
      predictor.map((eta) => eta + 1e-6),
    ).means;
    const down = meansAt(
      of,
      predictor.map((eta) => eta - 1e-6),
    ).means;
    for (const [g, slope] of slopes.entries())
      expect(((up[g] as number) - (down[g] as number)) / 2e-6 / slope).toBeCloseTo(1, 7);
    for (const [g, eta] of predictorOf(of, means).entries()) expect(eta).toBeCloseTo(predictor[g] as number, 12);
    if (of.kind === 'binomial')
      for (const [g, mu] of means.entries()) expect(mu + (rest[g] as number)).toBeCloseTo(1, 14);
  });

  it('has variances in percent squared where the response is in percent', () => {
    const means = meansAt(part({ scale: 'identity' }), Float64Array.of(0.5, 0.5, 0.5, 0.5, 0.5));
    expect(samplingAt(part({ scale: 'identity', whole: 100 }), means)[0]).toBeCloseTo(250, 10);
    expect(samplingAt(part({ scale: 'identity' }), means)[0]).toBeCloseTo(0.025, 14);
  });

  it('keeps the distance of a share from 1 where doubles lose it, and names cells outside the range', () => {
    const { rest } = meansAt(part({}), Float64Array.of(50, 0, 0, 0, 0));
    expect(rest[0]).toBeCloseTo(Math.exp(-50), 30);
    const identity = part({ scale: 'identity' });
    expect(outsideRange(meansAt(identity, Float64Array.of(0, 0.5, 1, -0.1, 1.1)))).toEqual([0, 2, 3, 4]);
    expect(outsideRange(meansAt({ ...identity, kind: 'counts' }, Float64Array.of(0, 0.5, 1, -0.1, 9)))).toEqual([0, 3]);
  });
});
