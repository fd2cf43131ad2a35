import type { Result } from '../protocol/result';
import { count } from './numbers';

interface Method {
  readonly title: string;
  readonly text: string;
  readonly sources: string;
}

/** Methods behind bounds, common correlations, draws and what it would take: those that this result rests on. */
export function limitMethods({ bounds, commonCorrelation, bootstrapTau2, whatItTakes }: Result): Method[] {
  const held = bounds.some(({ weightsHeld }) => weightsHeld);
  const draws = bootstrapTau2?.[0];
  return [
    ...(bounds.length === 0
      ? []
      : [
          {
            title: 'Bounds',
            text: held
              ? 'Cells with suppressed, interval or rounded values take every value that their limits allow. Weights are held at the fit’s variance parameters, each coefficient goes to its two extremes, and the whole fit is made again there.'
              : 'Cells with suppressed, interval or rounded values take every value that their limits allow. The weights do not depend on the outcome, so that a coefficient is the sum of pulls times values, and each value goes to the end that its pull asks for.',
            sources: '',
          },
        ]),
    ...(draws === undefined
      ? []
      : [
          {
            title: 'Draws without the part',
            text: `Outcomes are drawn from normal errors with the covariance of the best fit without the part (${count(draws.replications)} draws, seed ${draws.seed}), and the likelihood ratio is had anew for each. Where several parts or cells that go together stand beside it, the ratio is looked at on a fixed grid of variances, for data and draws alike.`,
            sources: 'Davison & Hinkley 1997',
          },
        ]),
    ...(commonCorrelation.length === 0
      ? []
      : [
          {
            title: 'Sampling errors that go together',
            text: 'A common correlation from 0 to 0.5 is put between the sampling errors of all cells; pulls and variances stay as they are fitted.',
            sources: '',
          },
        ]),
    ...(whatItTakes === null || whatItTakes.every(({ halfWidth }) => halfWidth === null)
      ? []
      : [
          {
            title: 'What it would take',
            text: 'G′ cells like these divide every error variance by G′/G, and freedom grows with them; f times the persons in each cell divide its sampling part by f (or by f to the exponent of size), the other parts stay. A difference counts as found with power 0.8 of the two-sided test, by the noncentral t distribution.',
            sources: 'Johnson, Kotz & Balakrishnan 1995',
          },
        ]),
  ];
}
