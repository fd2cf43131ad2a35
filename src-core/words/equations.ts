import type { Part, Plan } from '../protocol/plan';
import type { Result } from '../protocol/result';
import { interceptName } from '../protocol/term-names';
import { exact, list, number } from './numbers';
import { responseName } from './units';

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
  return {
    text: `${name} = ${[...parts, ...more, 'u'].join(' + ')}`,
    spoken: `${name} is the sum of ${list(shown)}${rest > 0 ? ` and ${number(rest, { decimals: 0 })} more terms` : ''}, each times its coefficient, and an error u`,
  };
}

const MOST_LETTERS = 150;

/** How many terms take two or three lines; at least one besides the intercept. */
function fitting(terms: readonly string[]): number {
  let letters = 0;
  const over = terms.findIndex((term) => (letters += term.length + 5) > MOST_LETTERS);
  return over < 0 ? terms.length : Math.max(2, over);
}

function subscript(value: number): string {
  return [...String(value)].map((digit) => '₀₁₂₃₄₅₆₇₈₉'[Number(digit)]).join('');
}

/** The error variance as an equation, with the estimates, and the same in words. */
export function varianceEquation({ plan, fit }: Pick<Result, 'plan' | 'fit'>): {
  readonly text: string;
  readonly spoken: string;
} {
  const parts = plan.variance.parts.map((part) => partSigns(part, plan));
  const values = fit.variance
    .filter((one) => one.estimate !== null && ['phi', 'tau2', 'delta'].includes(one.name))
    .map((one) => `${{ phi: 'φ', tau2: 'τ²', delta: 'δ' }[one.name]} = ${number(one.estimate, { digits: 4 })}`);
  return {
    text: `Var(u) = ${[parts.map(([sign]) => sign).join(' + '), ...values].join(',   ')}`,
    spoken: `The variance of u is ${parts.map(([, words]) => words).join(' plus ')}`,
  };
}

function partSigns(part: Part, { roles }: Plan): readonly [string, string] {
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
    case 'between':
      return ['τ²', 'tau squared'];
    case 'shared':
      return [`ω² (${part.by.join(' × ')})`, `omega squared for cells of the same ${part.by.join(' and ')}`];
    default:
      return [part.kind, `the part ${part.kind}`];
  }
}
