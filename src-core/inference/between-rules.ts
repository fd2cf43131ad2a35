import { fitStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import type { Estimate } from '../protocol/plan';
import type { BetweenRule } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import { coefficientsOf } from './coefficients';
import { likelihoodsOf } from './likelihoods';
import { parameterInterval } from './parameter-profile';
import { qProfileOf } from './q-profile-of';
import { numberOrNull, studentOn } from './reference';

const rules: readonly { readonly rule: BetweenRule['rule']; readonly estimate: Estimate }[] = [
  { rule: 'dersimonian-laird', estimate: { method: 'moments', rule: 'dersimonian-laird' } },
  { rule: 'paule-mandel', estimate: { method: 'moments', rule: 'paule-mandel' } },
  { rule: 'hanushek', estimate: { method: 'moments', rule: 'hanushek' } },
  { rule: 'full', estimate: { method: 'full' } },
  { rule: 'restricted', estimate: { method: 'restricted' } },
];

/**
 * tau^2 by every rule, and the coefficients at each: it is not one number.
 *
 * fitted: a fit of between + given with a fixed scale and tau^2 estimated; empty for every other. The design, the data and the target stay.
 * Each row: profile-likelihood ends under the two likelihoods, Q-profile ends (the same for all), coefficients with model-based errors and t on
 * G - k. A rule that finds nothing to estimate from has null figures and no coefficients.
 *
 * Example: thirteen vaccine trials: .30876026 | .31806845 | ... | .28002814 | .31324325.
 * Source: DerSimonian & Laird 1986; Paule & Mandel 1982; Hanushek 1974; Lewis & Linzer 2005; Viechtbauer 2007.
 */
export function betweenRulesOf(fitted: Fitted, level: number, hooks?: Hooks): BetweenRule[] {
  const { structure } = fitted;
  if (fitted.fixedPoint) return [];
  if (structure.betweenAt < 0 || structure.scaleAt >= 0 || structure.parameters[structure.betweenAt]?.fixed !== null)
    return [];
  const q = qProfileOf(likelihoodsOf(fitted), level);
  return rules.map(({ rule, estimate }) => rowOf({ rule, fitted: refitted(fitted, estimate, hooks), q, level, hooks }));
}

function refitted(fitted: Fitted, estimate: Estimate, hooks?: Hooks): Fitted | null {
  const { response, design, structure, targetIsStructure } = fitted;
  const weighting = targetIsStructure ? null : fitted.weighting;
  const found = fitStructure({ response, design, structure, estimate, weighting, ...(hooks && { hooks }) });
  return found.ok ? found.value : null;
}

function rowOf(known: {
  readonly rule: BetweenRule['rule'];
  readonly fitted: Fitted | null;
  readonly q: { readonly low: number | null; readonly high: number | null };
  readonly level: number;
  readonly hooks: Hooks | undefined;
}): BetweenRule {
  const { rule, fitted, q, level, hooks } = known;
  const ends = { qLow: q.low, qHigh: q.high };
  if (!fitted) return { rule, tau2: null, profileLow: null, profileHigh: null, ...ends, coefficients: [] };
  const { structure, theta, errors, residualFreedom } = fitted;
  const likely = rule === 'full' || rule === 'restricted';
  const tau2 = theta[structure.betweenAt] as number;
  const asked = { index: structure.betweenAt, level, step: null };
  const profile = likely ? parameterInterval(likelihoodsOf(fitted), asked, hooks) : { low: null, high: null };
  return {
    rule,
    tau2,
    profileLow: profile.low,
    profileHigh: profile.high,
    ...ends,
    coefficients: coefficientsOf({
      names: fitted.design.names,
      estimates: fitted.coefficients,
      errors: Array.from(errors, numberOrNull),
      references: Array.from(errors, () => studentOn(residualFreedom)),
      level,
    }),
  };
}
