import { leastSquares } from '../algebra/least-squares';
import {
  type MeanDependent,
  meansAt,
  outsideRange,
  predictorOf,
  samplingAt,
  smoothedMeans,
} from '../model/mean-dependent';
import { fromDoubles } from '../numbers/decimals';
import { done, type Outcome } from '../protocol/outcome';
import type { Model } from './fit-model';
import { outside } from './mean-settled';

/** A predictor inside the range, in the columns' span: least squares of the smoothed outcomes, drawn towards the common mean as far as it takes. */
export function insideStart(model: Model, part: MeanDependent): Outcome<Float64Array> {
  const smoothed = smoothedMeans(part);
  const target = predictorOf(part, smoothed);
  const variances = samplingAt({ ...part, whole: 1 }, meansAt(part, target));
  const near = fittedTo(model, target, variances);
  const [middle] = predictorOf(part, Float64Array.of(commonMean(part, smoothed)));
  const centre = fittedTo(model, new Float64Array(target.length).fill(middle as number), variances);
  for (let share = 1; share > 1e-6; share /= 2) {
    const drawn = centre.map((value, g) => value + share * ((near[g] as number) - value));
    if (outsideRange(meansAt(part, drawn)).length === 0) return done(drawn);
  }
  return outsideRange(meansAt(part, centre)).length === 0
    ? done(centre)
    : outside(part, outsideRange(meansAt(part, near)), near);
}

function commonMean({ amounts }: MeanDependent, smoothed: Float64Array): number {
  let [counted, total] = [0, 0];
  for (const [g, w] of amounts.entries()) {
    counted += w * (smoothed[g] as number);
    total += w;
  }
  return counted / total;
}

function fittedTo({ design }: Model, target: Float64Array, variances: Float64Array): Float64Array {
  const solved = leastSquares({ columns: design.columns, y: fromDoubles(target), variances });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  return target.map((value, g) => value - (solved.residuals[g] as number));
}
