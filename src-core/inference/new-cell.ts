import type { Fitted } from '../estimate/fitted';
import { exp, pow } from '../numbers/elementary';
import type { Plan, Question } from '../protocol/plan';
import { numberOrNull } from './reference';

type Expect = Extract<Question, { kind: 'expect' }>;

/** tau^2 of the fitted structure: 0 where no between part stands. */
export function betweenVariance(fitted: Fitted): number {
  const { structure, theta } = fitted;
  return structure.betweenAt < 0 ? 0 : (theta[structure.betweenAt] as number);
}

/**
 * Sampling variance of a cell that has not been seen, under the fitted structure.
 *
 *     phi | phi / size | phi error^2 | phi size^-delta | phi z^delta
 *
 * Squared units of the outcome's scale. size is the effective size; z is taken from `where`. expected: the fitted mean, which carries a given
 * error over to the log or logit scale by its slope there.
 * Null where the question does not say what the part needs, or phi is undefined.
 *
 * Example: phi 136.4 per person and size 40: 3.41.
 */
export function newSamplingVariance(known: {
  readonly plan: Plan;
  readonly fitted: Fitted;
  readonly question: Expect;
  readonly expected: number;
}): number | null {
  const { plan, fitted, question, expected } = known;
  const { structure, theta } = fitted;
  const phi = structure.scaleAt < 0 ? 1 : (theta[structure.scaleAt] as number);
  const shape = shapeOf(plan, question, { fitted, expected });
  return shape === null ? null : numberOrNull(phi * shape);
}

function shapeOf(
  plan: Plan,
  { where, size, error }: Expect,
  known: { readonly fitted: Fitted; readonly expected: number },
): number | null {
  for (const part of plan.variance.parts) {
    switch (part.kind) {
      case 'constant':
        return 1;
      case 'per-size':
        return size === null ? null : 1 / size;
      case 'given':
        return error === null ? null : squared(error / slopeBack(plan, known.expected));
      case 'size-power':
        return size === null ? null : pow(size, -exponentOf(part.exponent, known.fitted));
      case 'proxy': {
        const z = where[part.column];
        return typeof z === 'number' && z > 0 ? pow(z, exponentOf(part.exponent, known.fitted)) : null;
      }
      case 'between':
      case 'shared':
        continue;
      default:
        return null;
    }
  }
  return null;
}

function exponentOf(exponent: number | 'estimate', { structure, theta }: Fitted): number {
  if (exponent !== 'estimate') return exponent;
  return theta[structure.parameters.findIndex((parameter) => parameter.role === 'exponent')] as number;
}

/** How much the outcome in its own unit moves with the outcome on its scale, at the expected value. */
function slopeBack({ outcomeScale, roles }: Plan, expected: number): number {
  if (outcomeScale === 'log') return exp(expected);
  if (outcomeScale === 'identity') return 1;
  const odds = exp(expected);
  const whole = roles.outcomeUnit === 'percent' ? 100 : 1;
  return (whole * odds) / squared(1 + odds);
}

function squared(x: number): number {
  return x * x;
}
