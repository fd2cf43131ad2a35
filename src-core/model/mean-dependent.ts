import { exp, log, log1p } from '../numbers/elementary';
import type { OutcomeScale } from '../protocol/plan';

/**
 * A sampling part whose variances follow from the fitted means, whatever its scale phi.
 *
 *     binomial  Var = mu (1 - mu) / m        counts  Var = mu / w,  w = e / per
 *
 * Vectors have length G. On the identity scale the linear predictor is the mean, in percent where `whole` is 100; on logit and log it is that
 * function of the mean.
 */
export interface MeanDependent {
  readonly kind: 'binomial' | 'counts';
  readonly scale: OutcomeScale;
  /** y: a share from 0 to 1, or a rate. */
  readonly observed: Float64Array;
  /** m_g, or exposure over `per`: observed times amount is a count. */
  readonly amounts: Float64Array;
  /** 100 where the response on the identity scale is in percent, else 1. */
  readonly whole: number;
  /** True where observed times amount is the count itself, with no design effect between: the counts then have a likelihood. */
  readonly asCounted: boolean;
  readonly labels: readonly string[];
}

/** Means and what hangs on them, one entry a cell: `rest` is 1 - mu without cancellation (1 for counts), `slopes` dmu/deta. */
export interface Means {
  readonly means: Float64Array;
  readonly rest: Float64Array;
  readonly slopes: Float64Array;
}

/** Derivatives of ln L by each cell's own linear predictor: u, and what is taken for minus the second one. */
export interface Curvature {
  readonly scores: Float64Array;
  readonly weights: Float64Array;
}

/** Least share of the expected information that stands in for the observed one where that vanishes (a rate of 0). */
const LEAST_SHARE = 0.01;

/**
 * The fitted means at a linear predictor.
 *
 * predictor: length G, in shares or rates on the identity scale. Example: a predictor of 0 on logit is a mean of .5 with slope .25.
 */
export function meansAt({ kind, scale }: MeanDependent, predictor: Float64Array): Means {
  const means = predictor.map(inverse[scale]);
  const rest =
    kind === 'counts'
      ? new Float64Array(means.length).fill(1)
      : scale === 'logit'
        ? predictor.map((eta) => inverse.logit(-eta))
        : means.map((mu) => 1 - mu);
  const slopes = means.map((mu, g) => (scale === 'identity' ? 1 : scale === 'log' ? mu : mu * (rest[g] as number)));
  return { means, rest, slopes };
}

/** Beyond this a mean stands at what it is there: still above 0, and far below anything that counts could tell. */
const FURTHEST = 600;

function held(eta: number): number {
  return Math.min(FURTHEST, Math.max(-FURTHEST, eta));
}

const inverse: { readonly [S in OutcomeScale]: (eta: number) => number } = {
  identity: (eta) => eta,
  log: (eta) => exp(held(eta)),
  logit: (eta) => (eta < 0 ? exp(held(eta)) / (1 + exp(eta)) : 1 / (1 + exp(-eta))),
};

/** Cells whose mean is outside the open range: (0, 1), or above 0 for counts. */
export function outsideRange({ means, rest }: Means): number[] {
  return [...means.keys()].filter((g) => !((means[g] as number) > 0 && (rest[g] as number) > 0));
}

/**
 * Variances at fitted means on the scale of the linear predictor, phi left out, in its unit squared.
 *
 *     V(mu) / (w slope^2),  V = mu (1 - mu) | mu
 *
 * Example: a mean of .5 of 100 respondents: .0025 on the identity scale, .04 on logit.
 */
export function samplingAt({ amounts, whole }: MeanDependent, { means, rest, slopes }: Means): Float64Array {
  return amounts.map((w, g) => {
    const slope = (slopes[g] as number) / whole;
    return ((means[g] as number) * (rest[g] as number)) / w / slope / slope;
  });
}

/** Means to begin with: counts with half of one added, so that none is 0 or everything. */
export function smoothedMeans({ kind, observed, amounts }: MeanDependent): Float64Array {
  return observed.map((y, g) => {
    const w = amounts[g] as number;
    const added = Math.min(0.5, 0.5 * w);
    return kind === 'binomial' ? (y * w + added) / (w + 2 * added) : y + 0.5 / w;
  });
}

/** The linear predictor at given means, in shares or rates on the identity scale. */
export function predictorOf({ scale }: MeanDependent, means: Float64Array): Float64Array {
  if (scale === 'identity') return means.slice();
  return means.map((mu) => (scale === 'log' ? log(mu) : log(mu) - log1p(-mu)));
}

/**
 * ln L of the counts but for what the means do not enter.
 *
 *     binomial  sum w [ y ln mu + (1 - y) ln(1 - mu) ]        counts  sum w [ y ln mu - mu ]
 */
export function heightOf(part: MeanDependent, predictor: Float64Array, { means, rest }: Means): number {
  const { kind, scale, observed, amounts } = part;
  let height = 0;
  for (let g = 0; g < amounts.length; g++) {
    const [y, mu, eta] = [observed[g] as number, means[g] as number, predictor[g] as number];
    const w = amounts[g] as number;
    const own = y === 0 ? 0 : y * (scale === 'log' ? eta : scale === 'logit' ? -softplus(-eta) : log(mu));
    if (kind === 'counts') height += w * (own - mu);
    else if (y === 1) height += w * own;
    else height += w * (own + (1 - y) * (scale === 'logit' ? -softplus(eta) : log(rest[g] as number)));
  }
  return height;
}

/** ln(1 + e^x). */
function softplus(x: number): number {
  return x > 0 ? x + log1p(exp(-x)) : log1p(exp(x));
}

/**
 * Slope and curvature of ln L by each cell's linear predictor.
 *
 *     u = w (y - mu) slope / V,  weights: the observed information, never below a hundredth of the expected w slope^2 / V
 *
 * On logit for shares and on log for rates the two informations are one.
 */
export function curvatureOf(part: MeanDependent, { means, rest, slopes }: Means): Curvature {
  const { kind, scale, observed, amounts } = part;
  const scores = new Float64Array(amounts.length);
  const weights = new Float64Array(amounts.length);
  for (let g = 0; g < amounts.length; g++) {
    const [y, mu, left, slope] = [observed[g], means[g], rest[g], slopes[g]] as [number, number, number, number];
    const w = amounts[g] as number;
    const apart = kind === 'binomial' ? y * left - (1 - y) * mu : y - mu;
    const expected = (w * slope * slope) / mu / left;
    scores[g] = (w * apart * slope) / mu / left;
    weights[g] = expected * Math.max(LEAST_SHARE, observedOverExpected({ kind, scale, y, mu, left }));
  }
  return { scores, weights };
}

/** Observed over expected information of one cell. */
function observedOverExpected(of: {
  readonly kind: MeanDependent['kind'];
  readonly scale: OutcomeScale;
  readonly y: number;
  readonly mu: number;
  readonly left: number;
}): number {
  const { kind, scale, y, mu, left } = of;
  if (scale === 'logit' || (scale === 'log' && kind === 'counts')) return 1;
  if (scale === 'log') return (1 - y) / left;
  if (kind === 'counts') return y / mu;
  return (y * left) / mu + ((1 - y) * mu) / left;
}

/** The part with some of a count added everywhere, to each side of a share: a barrier that keeps means inside their range. */
export function softened(part: MeanDependent, added: number): MeanDependent {
  const { kind, observed, amounts } = part;
  if (kind === 'counts') return { ...part, observed: observed.map((y, g) => y + added / (amounts[g] as number)) };
  return {
    ...part,
    observed: observed.map((y, g) => (y * (amounts[g] as number) + added) / ((amounts[g] as number) + 2 * added)),
    amounts: amounts.map((w) => w + 2 * added),
  };
}
