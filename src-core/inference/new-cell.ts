import type { Fitted } from '../estimate/fitted';
import { learnTerms } from '../model/learn-terms';
import { rowOf } from '../model/row';
import { exp, pow } from '../numbers/elementary';
import type { Part, Plan, Question } from '../protocol/plan';
import type { Cells } from '../table/cells';
import { composed } from '../table/declarations';
import { numberOrNull } from './reference';

type Expect = Extract<Question, { kind: 'expect' }>;

/** tau^2 of the fitted structure: 0 where no between part stands. */
export function betweenVariance(fitted: Fitted): number {
  const { structure, theta } = fitted;
  return structure.betweenAt < 0 ? 0 : (theta[structure.betweenAt] as number);
}

/** By how much the true value of a new cell, in new groups, scatters about its mean: tau^2 and every omega^2. */
export function newCellVariance(fitted: Fitted): number {
  const { structure, theta } = fitted;
  return structure.parameters.reduce(
    (sum, { role }, i) => (role === 'between' || role === 'shared' ? sum + (theta[i] as number) : sum),
    0,
  );
}

/**
 * Sampling variance of a cell that has not been seen, under the fitted structure.
 *
 *     phi | phi / size | phi error^2 | phi size^-delta | phi z^delta | phi_c | phi_c / size | exp(z'gamma)
 *     phi mu (1 - mu) / size | phi per mu / e, over the square of the scale's slope
 *
 * Squared units of the outcome's scale. size is the effective size, error stands for a matrix as well; z, the class and the exposure are taken from `where`.
 * expected: the fitted mean, which carries a given error over to the log or logit scale by its slope there. cells: where a log-linear part needs its levels.
 * Null where the question does not say what the part needs, or phi is undefined.
 *
 * Example: phi 136.4 per person and size 40: 3.41.
 */
export function newSamplingVariance(known: {
  readonly plan: Plan;
  readonly fitted: Fitted;
  readonly question: Expect;
  readonly expected: number;
  readonly cells: Cells;
}): number | null {
  const { plan, fitted, question } = known;
  const { structure, theta } = fitted;
  const phi = structure.scaleAt < 0 ? 1 : (theta[structure.scaleAt] as number);
  const shape = shapeOf(plan, question, known);
  return shape === null ? null : numberOrNull(phi * shape);
}

function shapeOf(
  plan: Plan,
  { where, size, error }: Expect,
  known: { readonly fitted: Fitted; readonly expected: number; readonly cells: Cells },
): number | null {
  for (const part of plan.variance.parts) {
    switch (part.kind) {
      case 'constant':
        return 1;
      case 'per-size':
        return size === null ? null : 1 / size;
      case 'given':
      case 'matrix':
        return error === null ? null : squared(error / slopeBack(plan, known.expected));
      case 'size-power':
        return size === null ? null : pow(size, -exponentOf(part.exponent, known.fitted));
      case 'proxy': {
        const z = where[part.column];
        return typeof z === 'number' && z > 0 ? pow(z, exponentOf(part.exponent, known.fitted)) : null;
      }
      case 'binomial':
        return size === null ? null : countedVariance(plan, known.expected) / size;
      case 'counts': {
        const exposure = where[plan.roles.exposure as string];
        const counted = typeof exposure === 'number' && exposure > 0;
        return counted ? (countedVariance(plan, known.expected) * plan.roles.per) / exposure : null;
      }
      case 'per-class': {
        const own = classVariance(where[part.column], known.fitted);
        return own === null || (part.perSize && size === null) ? null : own / (part.perSize ? (size as number) : 1);
      }
      case 'log-linear':
        return logLinearVariance(part, where, known);
      case 'between':
      case 'shared':
        continue;
    }
  }
  return null;
}

/** phi of a class that the cells have; null for another, or none. */
function classVariance(found: number | string | undefined, { structure, theta }: Fitted): number | null {
  if (found === undefined) return null;
  const at = structure.parameters.findIndex(({ name }) => name === `phi: ${composed(String(found))}`);
  return at < 0 ? null : (theta[at] as number);
}

/** exp(z'gamma); null where a column of z is not stated, or a level is none of the cells'. */
function logLinearVariance(
  { terms }: Extract<Part, { kind: 'log-linear' }>,
  where: Expect['where'],
  { fitted, cells }: { readonly fitted: Fitted; readonly cells: Cells },
): number | null {
  if (!terms.every(({ column }) => Object.hasOwn(where, column))) return null;
  const learned = learnTerms({ terms, intercept: true, cells });
  const row = learned.ok ? rowOf(learned.value, where) : learned;
  if (!row.ok) return null;
  const { parameters } = fitted.structure;
  const gammas = parameters.flatMap(({ role }, i) => (role === 'gamma' ? [fitted.theta[i] as number] : []));
  return exp(row.value.reduce((sum, z, i) => sum + z * (gammas[i] as number), 0));
}

function exponentOf(exponent: number | 'estimate', { structure, theta }: Fitted): number {
  if (exponent !== 'estimate') return exponent;
  return theta[structure.parameters.findIndex((parameter) => parameter.role === 'exponent')] as number;
}

/** V(mu) over the square of the scale's slope: mu (1 - mu) or mu on the identity scale, in its unit. */
function countedVariance({ outcomeScale, roles, variance }: Plan, expected: number): number {
  const counts = variance.parts.some(({ kind }) => kind === 'counts');
  const whole = outcomeScale === 'identity' && roles.outcomeUnit === 'percent' ? 100 : 1;
  if (outcomeScale === 'identity') {
    const within = counts ? expected > 0 : expected > 0 && expected < whole;
    return within ? expected * (counts ? 1 : whole - expected) : Number.NaN;
  }
  const odds = exp(expected);
  if (outcomeScale === 'logit') return squared(1 + odds) / odds;
  return counts ? 1 / odds : (1 - odds) / odds;
}

/** How much the outcome in its own unit moves with the outcome on its scale, at the expected value. */
function slopeBack({ outcomeScale, roles }: Plan, expected: number): number {
  if (outcomeScale === 'identity') return 1;
  const odds = exp(expected);
  const whole = roles.outcomeUnit === 'percent' ? 100 : 1;
  if (outcomeScale === 'log') return whole * odds;
  return (whole * odds) / squared(1 + odds);
}

function squared(x: number): number {
  return x * x;
}
