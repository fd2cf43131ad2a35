import { leastSquares } from '../algebra/least-squares';
import { type MeanDependent, type Means, meansAt, outsideRange } from '../model/mean-dependent';
import { type Decimals, fromDoubles } from '../numbers/decimals';
import { done, type Outcome, refuse } from '../protocol/outcome';
import { countedLogLikelihood, devianceOf } from './counted-likelihood';
import type { Model } from './fit-model';
import type { Fitted, FixedPoint } from './fitted';
import { climbMeans, type Summit } from './mean-ascent';
import { byRounds } from './mean-rounds';
import { besideOthers, outside, type Settle, settledAt, sharesOf } from './mean-settled';
import { insideStart } from './mean-start';
import { separationAlong } from './separation';

/**
 * Fits a structure whose sampling part follows from fitted means: mu -> variances -> coefficients, to a fixed point.
 *
 *     identity  Var = phi mu (1 - mu) / m | phi mu / w           log, logit  maximum likelihood, z = eta + (y - mu) / slope, Var(z) = Var / slope^2
 *
 * Alone such a fixed point maximises the likelihood of the counts: it is found by climbing it, and a free scale is Pearson / (G - k) whatever the
 * method. Beside other parts each round estimates their parameters by the plan's method, the sampling variances held. Two-step takes the means of
 * unweighted least squares and goes no further. settle: fits a structure whose variances are settled.
 * The fit holds the settled structure, and `fixedPoint`; under a link its response is the working one.
 * Refuses means outside (0, 1), or not above 0, at the fixed point (`fitted-outside`, the cells named), a likelihood that rises without end
 * (`separated`, the cells and coefficients named), and rounds that do not settle (`not-settled`).
 *
 * Example: admissions by department and gender, identity: 0.65759, -0.01096, ..., Pearson 18.93 on 5.
 * Source: Wedderburn 1974; Berkson 1955; McCullagh & Nelder 1989.
 */
export function fitMeans(model: Model, part: MeanDependent, settle: Settle): Outcome<Fitted> {
  const alone = model.structure.parts.length === 1 && model.structure.links === null;
  if (part.scale !== 'identity' && !alone)
    return refuse('not-together', { keys: ['variance', 'estimate'] }, '/estimate/method');
  const start = insideStart(model, part);
  if (model.estimate.method === 'two-step') return twoStep(model, part, { settle, alone });
  if (!start.ok) return start;
  if (!alone) return byRounds(model, part, { settle, start: start.value });
  const { design, hooks } = model;
  const summit = climbMeans({ part, design, ...(hooks && { cancelled: hooks.cancelled }) }, start.value);
  if (summit.ended !== 'there') return notThere(model, part, summit);
  return atSummit(model, part, { settle, summit });
}

interface Found {
  readonly predictor: Float64Array;
  readonly means: Means;
  readonly rounds: number;
}

/** The fit at the means found, where the part stands alone. */
function atSummit(
  model: Model,
  part: MeanDependent,
  of: { readonly settle: Settle; readonly summit: Found },
): Outcome<Fitted> {
  const { means, rounds } = of.summit;
  const settled = settledAt(model.structure, part, means);
  const response = part.scale === 'identity' ? model.response : workingResponse(part, of.summit);
  const fitted = of.settle({ ...model, response, structure: settled, estimate: { method: 'least-squares' } });
  if (!fitted.ok) return fitted;
  const unscaled = model.structure.parameters.length === 0;
  const fixedPoint: FixedPoint = {
    kind: part.kind,
    alone: true,
    rounds,
    means: means.means,
    deviance: devianceOf(part, means),
    logLikelihood: unscaled && part.scale !== 'identity' ? countedLogLikelihood(part, means) : null,
    link: part.scale === 'identity' ? null : { scale: part.scale, observed: model.response, slopes: means.slopes },
  };
  return done({ ...fitted.value, fixedPoint });
}

/** z = eta + (y - mu) / slope. */
function workingResponse({ kind, observed }: MeanDependent, { predictor, means: of }: Found): Decimals {
  const { means, rest, slopes } = of;
  return fromDoubles(
    predictor.map((eta, g) => {
      const [y, mu] = [observed[g] as number, means[g] as number];
      const apart = kind === 'binomial' ? y * (rest[g] as number) - (1 - y) * mu : y - mu;
      return eta + apart / (slopes[g] as number);
    }),
  );
}

/** Means of unweighted least squares, one weighted fit. */
function twoStep(
  model: Model,
  part: MeanDependent,
  { settle, alone }: { readonly settle: Settle; readonly alone: boolean },
): Outcome<Fitted> {
  const solved = leastSquares({ columns: model.design.columns, y: model.response, variances: null });
  if ('dependent' in solved) throw new RangeError('the design was not checked');
  const means = meansAt(part, sharesOf(model, part, solved.residuals));
  const wrong = outsideRange(means);
  if (wrong.length > 0) return outside(part, wrong, means.means);
  const fitted = settle({ ...model, structure: settledAt(model.structure, part, means) });
  if (!fitted.ok) return fitted;
  return done({ ...fitted.value, fixedPoint: { ...besideOthers(part, means, 1), alone } });
}

function notThere(model: Model, part: MeanDependent, summit: Summit): Outcome<never> {
  if (summit.ended === 'at-the-end') return outside(part, summit.cells, summit.means.means);
  if (summit.ended !== 'running') return refuse('cancelled', {});
  const separated = separationAlong({ part, design: model.design }, summit.step);
  if (!separated) return refuse('not-settled', { part: part.kind, rounds: summit.rounds }, '/variance');
  return refuse(
    'separated',
    {
      labels: separated.cells.map((g) => part.labels[g] as string),
      coefficients: separated.coefficients.map((j) => model.design.names[j] as string),
    },
    '/terms',
  );
}
