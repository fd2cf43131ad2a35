import type { Fitted } from '../estimate/fitted';
import type { Design } from '../model/design';
import { type Means, meansAt, samplingAt } from '../model/mean-dependent';
import type { Structure } from '../model/structure';
import { withSampling } from '../model/structure-join';

/** Where a fit puts other cells of the same model. */
export interface Settled {
  /** With variances that follow from means held at what the fit says of these cells. */
  readonly structure: Structure;
  /** Linear predictor and means of these cells, in shares or rates; null where variances do not follow from means. */
  readonly at: {
    readonly predictor: Float64Array;
    readonly means: Means;
    readonly linked: boolean;
    readonly whole: number;
  } | null;
}

/** A structure on cells of a design, its means held at the coefficients of a fit. */
export function settledBy(
  fitted: Fitted,
  { structure, design }: { readonly structure: Structure; readonly design: Design },
): Settled {
  const part = structure.meanDependent;
  if (!part) return { structure, at: null };
  const predictor = new Float64Array(structure.count);
  for (const [j, { high }] of design.columns.entries())
    for (let g = 0; g < predictor.length; g++)
      predictor[g] = (predictor[g] as number) + (high[g] as number) * ((fitted.coefficients[j] as number) / part.whole);
  const means = meansAt(part, predictor);
  return {
    structure: withSampling(structure, samplingAt(part, means)),
    at: { predictor, means, linked: part.scale !== 'identity', whole: part.whole },
  };
}

/** The working response of outcomes in shares or rates under a link: eta + (y - mu) / slope. */
export function workingAt(
  { predictor, means: { means, slopes } }: NonNullable<Settled['at']>,
  outcome: Float64Array,
): Float64Array {
  return outcome.map((y, g) => (predictor[g] as number) + (y - (means[g] as number)) / (slopes[g] as number));
}
