import { isLinked } from '../protocol/linked';
import type { Part, Plan } from '../protocol/plan';
import type { Result } from '../protocol/result';
import { interceptName } from '../protocol/term-names';
import { classesSigns, logLinearSigns } from './estimated-variances';
import { exact, list, number, subscript } from './numbers';
import { parameterSign } from './structures';
import { outcomeName, responseName } from './units';

/** The model of the outcome as an equation; of more terms than fit on two lines, the number of the rest. */
export function modelEquation(
  plan: Plan,
  terms: readonly string[],
): { readonly text: string; readonly spoken: string } {
  const shown = terms.slice(0, fitting(terms));
  const rest = terms.length - shown.length;
  const start = terms[0] === interceptName && plan.intercept ? 0 : 1;
  const parts = shown.map((term, i) => {
    const beta = `β${subscript(i + start)}`;
    return term === interceptName && i === 0 && start === 0 ? beta : `${beta}\u00a0${term}`;
  });
  const more = rest > 0 ? [`${number(rest, { decimals: 0 })} more`] : [];
  const name = responseName(plan);
  const linked = isLinked(plan);
  const left = linked ? `${plan.outcomeScale}(μ)` : name;
  const ofMean = `${plan.outcomeScale} of μ, the expected ${outcomeName(plan)},`;
  return {
    text: `${left} = ${[...parts, ...more, ...(linked ? [] : ['u'])].join(' + ')}`,
    spoken: `${linked ? `The ${ofMean}` : name} is the sum of ${list(shown)}${rest > 0 ? ` and ${number(rest, { decimals: 0 })} more terms` : ''}, each times its coefficient${linked ? '' : ', and an error u'}`,
  };
}

const MOST_LETTERS = 150;
/** More values than this stand in their table alone. */
const MOST_VALUES = 4;

/** How many terms take two or three lines; at least one besides the intercept. */
function fitting(terms: readonly string[]): number {
  let letters = 0;
  const over = terms.findIndex((term) => (letters += term.length + 5) > MOST_LETTERS);
  return over < 0 ? terms.length : Math.max(2, over);
}

/** The error variance as an equation, with the estimates, and the same in words. */
export function varianceEquation({ plan, fit }: Pick<Result, 'plan' | 'fit'>): {
  readonly text: string;
  readonly spoken: string;
} {
  const parts = plan.variance.parts.map((part) => partSigns(part, { plan, fit }));
  const known = fit.variance.filter(({ estimate }) => estimate !== null);
  const values =
    known.length > MOST_VALUES
      ? []
      : known.map(({ name, estimate }) => `${parameterSign(name)} = ${number(estimate, { digits: 4 })}`);
  return {
    text: `Var(${isLinked(plan) ? 'y' : 'u'}) = ${[parts.map(([sign]) => sign).join(' + '), ...values].join(',   ')}`,
    spoken: `The variance of ${isLinked(plan) ? `${outcomeName(plan)} around μ` : 'u'} is ${parts.map(([, words]) => words).join(' plus ')}`,
  };
}

function partSigns(part: Part, { plan, fit }: Pick<Result, 'plan' | 'fit'>): readonly [string, string] {
  const { roles } = plan;
  const n = roles.designEffect === null ? 'n' : 'm';
  const power = (exponent: number | 'estimate'): string => (exponent === 'estimate' ? 'δ' : exact(exponent));
  switch (part.kind) {
    case 'constant':
      return ['φ', 'phi'];
    case 'per-size':
      return [`φ / ${n}`, `phi divided by ${n}, the ${n === 'n' ? 'size' : 'effective size'} of the cell`];
    case 'given':
      return part.scale === 'free'
        ? ['φ s²', 'phi times the square of s, the given error']
        : ['s²', 'the square of s, the given error'];
    case 'size-power':
      return [
        `φ / ${part.exponent === 0.5 ? `√${n}` : `${n}^${power(part.exponent)}`}`,
        `phi divided by ${n} to the power ${power(part.exponent)}`,
      ];
    case 'proxy':
      return [
        `φ ${part.column}^${power(part.exponent)}`,
        `phi times ${part.column} to the power ${power(part.exponent)}`,
      ];
    case 'binomial':
    case 'counts':
      return countedSigns(part, plan);
    case 'between':
      return ['τ²', 'tau squared'];
    case 'shared':
      return [`ω² (${part.by.join(' × ')})`, `omega squared of what its ${part.by.join(' and ')} shares`];
    case 'per-class':
      return classesSigns(part, plan);
    case 'log-linear':
      return logLinearSigns(fit.variance);
    case 'matrix':
      return part.scale === 'free'
        ? ['φ S_gg', 'phi times the entry on the diagonal of the supplied matrix']
        : ['S_gg', 'the entry on the diagonal of the supplied matrix'];
  }
}

/** From fitted means, or from the observed ones where the outcome itself was transformed. */
function countedSigns(part: Extract<Part, { kind: 'binomial' | 'counts' }>, plan: Plan): readonly [string, string] {
  const { outcomeScale, roles } = plan;
  const n = roles.designEffect === null ? 'n' : 'm';
  const [phi, times] = part.scale === 'free' ? ['φ ', 'phi times '] : ['', ''];
  const transformed = outcomeScale !== 'identity' && !isLinked(plan);
  if (part.kind === 'counts') {
    const per = roles.per === 1 ? '' : `${exact(roles.per)} `;
    return transformed
      ? [`${phi}1 / count`, `${times}one over the count`]
      : [`${phi}${per}μ / ${roles.exposure}`, `${times}${per}mu over ${roles.exposure}, mu the fitted rate`];
  }
  if (!transformed) {
    const whole = roles.outcomeUnit === 'percent' && outcomeScale === 'identity' ? '100' : '1';
    return [`${phi}μ (${whole} − μ) / ${n}`, `${times}mu times ${whole} minus mu over ${n}, mu the fitted share`];
  }
  return outcomeScale === 'logit'
    ? [`${phi}1 / (${n} p (1 − p))`, `${times}one over ${n} times p times one minus p, p the observed share`]
    : [`${phi}(1 − p) / (${n} p)`, `${times}one minus p over ${n} times p, p the observed share`];
}
