import { symmetricInverse } from '../algebra/dense';
import { likelihoodAt } from '../estimate/likelihood';
import { freeParameters, isVariance, partVariances, type Structure, withFixed } from '../model/structure';
import type { VarianceParameter } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Likelihoods } from './likelihoods';
import { parameterInterval } from './parameter-profile';
import type { Ends } from './profile';
import { qProfileOf } from './q-profile-of';
import { numberOrNull } from './reference';

/**
 * Every variance parameter with its standard error and interval.
 *
 * Error: root of the inverse expected information, of the full likelihood under full and two-step, else of the restricted; null under moments.
 * Interval: profile likelihood under full and restricted, Q-profile of tau^2 under moments, else null. Estimates are null where nothing is
 * left to estimate them from. A parameter that the user set has neither.
 *
 * Example: thirteen vaccine trials on latitude, restricted: tau2 0.076348, error 0.059047, 0.005807 to 0.443216.
 */
export function varianceParametersOf(likelihoods: Likelihoods, level: number, hooks?: Hooks): VarianceParameter[] {
  const { structure, theta } = likelihoods.fitted;
  const errors = informationErrors(likelihoods);
  const idle = idleAt(structure, theta);
  return structure.parameters.map((parameter, index) => {
    const { name, fixed } = parameter;
    const estimate = idle.has(index) && fixed === null ? null : numberOrNull(theta[index] as number);
    if (fixed !== null || estimate === null)
      return { name, estimate, se: null, low: null, high: null, atBoundary: false, fixed: fixed !== null };
    const se = errors?.[index] ?? null;
    hooks?.progress('fit', index / structure.parameters.length);
    const { low, high } = intervalOf(likelihoods, { index, level, step: se }, hooks);
    const atBoundary =
      estimate === 0 && (isVariance(parameter) || (parameter.role === 'correlation' && parameter.low === 0));
    return { name, estimate, se, low, high, atBoundary, fixed: false };
  });
}

function intervalOf(
  likelihoods: Likelihoods,
  asked: { index: number; level: number; step: number | null },
  hooks?: Hooks,
): Ends {
  const { method } = likelihoods.fitted.estimate;
  if (method === 'full' || method === 'restricted') return parameterInterval(likelihoods, asked, hooks);
  if (method === 'moments') return qProfileOf(likelihoods, asked.level);
  return { low: null, high: null };
}

/** Correlations of parts whose variances are 0: they carry no information. */
function idleAt({ parts }: Structure, theta: Float64Array): Set<number> {
  const idle = parts.filter((placed) => placed.rhoAt >= 0 && partVariances(placed, theta).every((v) => v === 0));
  return new Set(idle.map(({ rhoAt }) => rhoAt));
}

/**
 * By index of the parameter; undefined entries for fixed ones, and for a part at 0 whose correlation says nothing, since its own information
 * hangs on that. Null under moments, or where the information is singular.
 */
function informationErrors({ fitted, rows }: Likelihoods): (number | undefined)[] | null {
  const { theta, estimate } = fitted;
  if (estimate.method === 'moments' || fitted.residualFreedom <= 0) return null;
  const restricted = estimate.method === 'restricted' || estimate.method === 'least-squares';
  const structure = withoutIdleParts(fitted.structure, theta);
  const at = likelihoodAt({ rows, structure, restricted, theta });
  const finite = at?.information.every((row) => row.every((value) => numberOrNull(value) !== null));
  const inverse = at && finite ? symmetricInverse(at.information) : null;
  if (!inverse) return null;
  const errors = new Array<number | undefined>(theta.length).fill(undefined);
  for (const [place, index] of freeParameters(structure).entries())
    errors[index] = Math.sqrt(inverse[place]?.[place] as number) * (at?.units[place] as number);
  return errors;
}

function withoutIdleParts(structure: Structure, theta: Float64Array): Structure {
  const idle = idleAt(structure, theta);
  if (idle.size === 0) return structure;
  const settled = structure.parts
    .filter(({ rhoAt }) => idle.has(rhoAt))
    .flatMap(({ part, at, rhoAt }) => [...part.parameters.map((_, i) => at + i), rhoAt]);
  return settled.reduce(
    (left, i) => withFixed(left, left.parameters[i]?.name as string, theta[i] as number),
    structure,
  );
}
