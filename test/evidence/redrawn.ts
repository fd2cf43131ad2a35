import { fitStructure } from '@core/estimate/fit';
import { dumouchelDuncan } from '@core/evidence/added-columns';
import { boundaryLikelihoodRatios } from '@core/evidence/boundary';
import { brownForsythe } from '@core/evidence/brown-forsythe';
import { dependenceOf } from '@core/evidence/dependence';
import { type Frame, frameOf } from '@core/evidence/frame';
import { goldfeldQuandt } from '@core/evidence/goldfeld-quandt';
import { heterogeneity } from '@core/evidence/heterogeneity';
import { normalityOf } from '@core/evidence/normality';
import { breuschPagan, koenker, sizeScore, sizeScoreStudentised, white } from '@core/evidence/score-test';
import { sizeSlope } from '@core/evidence/size-slope';
import { fromDoubles } from '@core/numbers/decimals';
import { seeded } from '@core/numbers/random';
import type { Evidence } from '@core/protocol/result';
import { type FittedCase, took } from './fitted-case';

/** Never searches for a departure: the search is given up at once. */
const givenUp = () => true;

const single = {
  'breusch-pagan': breuschPagan,
  koenker,
  'size-score': sizeScore,
  'size-score-studentised': sizeScoreStudentised,
  'size-slope': sizeSlope,
  white,
  'goldfeld-quandt': goldfeldQuandt,
  'brown-forsythe': brownForsythe,
  'dumouchel-duncan': dumouchelDuncan,
  'shapiro-wilk': normalityOf,
  heterogeneity: (frame: Frame) => heterogeneity(frame, givenUp),
  'boundary-likelihood-ratio': (frame: Frame) => boundaryLikelihoodRatios(frame, givenUp)[0] as Evidence,
  dependence: (frame: Frame) => dependenceOf(frame, givenUp)[0] as Evidence,
};

export type Redrawn = keyof typeof single;

/** Simulation: how often a test rejects when the outcome is drawn anew, fitted anew and tested anew. */
export function rejectionShare(asked: {
  readonly of: FittedCase;
  readonly test: Redrawn;
  readonly draws: number;
  /** A draw of the errors, length G, from a stream of standard normal numbers. */
  readonly errors: (normal: () => number) => Float64Array;
}): number {
  const { of, test, draws, errors } = asked;
  const { normal } = seeded(20260801);
  let rejected = 0;
  for (let draw = 0; draw < draws; draw++) {
    const response = fromDoubles(errors(normal));
    const { design, structure, estimate } = of.fitted;
    const fitted = took(fitStructure({ response, design, structure, estimate }));
    const found = single[test](frameOf({ ...of, fitted }));
    const { p } = 'evidence' in found ? found.evidence : found;
    if (p !== null && p < 0.05) rejected++;
  }
  return rejected / draws;
}
