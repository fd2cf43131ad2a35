import type { Fitted } from '../estimate/fitted';
import { type LikelihoodRows, likelihoodRows } from '../estimate/likelihood-rows';
import { type Maximum, maximise } from '../estimate/maximise';
import { type Structure, withFixed } from '../model/structure';
import type { Outcome } from '../protocol/outcome';
import type { Hooks } from '../protocol/source';

/** The likelihood of a fit's own model, whatever its target. */
export interface OwnLikelihood {
  readonly rows: LikelihoodRows;
  readonly structure: Structure;
  readonly restricted: boolean;
}

const likelihoods = new WeakMap<Fitted, OwnLikelihood>();
const found = new WeakMap<OwnLikelihood, Map<string, Outcome<Maximum>>>();

/** Its rows are prepared once a fit. */
export function likelihoodOfFit(fitted: Fitted): OwnLikelihood {
  const known = likelihoods.get(fitted);
  if (known) return known;
  const { response, design, structure, estimate } = fitted;
  const rows = likelihoodRows({ response, design, structure });
  const made = { rows, structure, restricted: estimate.method === 'restricted' };
  likelihoods.set(fitted, made);
  return made;
}

/** The structure with parameters at 0; correlations of a part that vanishes go with it. */
export function without(structure: Structure, zero: readonly string[]): Structure {
  let left = zero.reduce((before, name) => withFixed(before, name, 0), structure);
  for (const { part, at, rhoAt } of structure.parts) {
    const rho = structure.parameters[rhoAt];
    const gone = part.parameters.some((_, i) => zero.includes(structure.parameters[at + i]?.name as string));
    if (rho && gone && rho.fixed === null) left = withFixed(left, rho.name, 0);
  }
  return left;
}

/** The maximum with parameters at 0: searched for once a fit, unless the run was cancelled. */
export function bestWithout(likelihood: OwnLikelihood, zero: readonly string[], hooks?: Hooks): Outcome<Maximum> {
  const all = found.get(likelihood) ?? new Map<string, Outcome<Maximum>>();
  found.set(likelihood, all);
  const key = zero.join('\n');
  const known = all.get(key);
  if (known) return known;
  const structure = without(likelihood.structure, zero);
  const best = maximise({ ...likelihood, structure, ...(hooks && { hooks }) });
  if (!hooks?.cancelled()) all.set(key, best);
  return best;
}
