import { type MeanDependent, type Means, samplingAt } from '../model/mean-dependent';
import type { Structure } from '../model/structure';
import { withSampling } from '../model/structure-join';
import { type Outcome, refuse } from '../protocol/outcome';
import type { Model } from './fit-model';
import type { Fitted, FixedPoint } from './fitted';

/** Fits a structure whose variances are settled. */
export type Settle = (model: Model) => Outcome<Fitted>;

/** A structure with the variances that these means give. */
export function settledAt(structure: Structure, part: MeanDependent, means: Means): Structure {
  return withSampling(structure, samplingAt(part, means));
}

/** Fitted means of an identity scale, in shares or rates. */
export function sharesOf({ response }: Model, { whole }: MeanDependent, residuals: Float64Array): Float64Array {
  return residuals.map((r, g) => ((response.high[g] as number) - r) / whole);
}

/** What is told of a fixed point beside other parts: no likelihood of the counts. */
export function besideOthers({ kind }: MeanDependent, { means }: Means, rounds: number): FixedPoint {
  return { kind, alone: false, rounds, means, deviance: null, logLikelihood: null, link: null };
}

/** Cells whose means are outside their range, in shares or rates. */
export function outside(part: MeanDependent, cells: readonly number[], means: Float64Array): Outcome<never> {
  return refuse(
    'fitted-outside',
    {
      part: part.kind,
      labels: cells.map((g) => part.labels[g] as string),
      fitted: cells.map((g) => means[g] as number),
      low: 0,
      high: part.kind === 'binomial' ? 1 : null,
    },
    '/variance',
  );
}
