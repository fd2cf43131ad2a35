import type { Part, Plan } from '../protocol/plan';
import type { VarianceParameter } from '../protocol/result';
import { termName } from '../protocol/term-names';
import { list, number, numberWord, subscript } from './numbers';

/** Classes up to this many are told one by one in a sentence. */
const FEW = 3;

/** A variance for every class of a column: its values, or how far they run. */
export function classesPhrase(
  part: Extract<Part, { kind: 'per-class' }>,
  of: {
    readonly variance: readonly VarianceParameter[];
    readonly size: string;
    readonly value: (name: string) => string;
  },
): string {
  const own = of.variance.filter(({ name }) => name.startsWith('phi: '));
  const divided = part.perSize ? ` divided by ${of.size}` : '';
  const start = `one of its own for each ${part.column}${divided}`;
  if (own.length === 0) return start;
  if (own.length <= FEW)
    return `${start}: ${list(own.map(({ name }) => `${of.value(name)} where it is ${name.slice('phi: '.length)}`))}`;
  const known = own.flatMap(({ estimate }) => estimate ?? []);
  if (known.length === 0) return start;
  const ends = [Math.min(...known), Math.max(...known)].map((value) => number(value, { digits: 3 }));
  return `${start}, from ${ends[0]} to ${ends[1]} over ${numberWord(own.length).toLowerCase()} of them`;
}

/** A variance that follows an estimated function of columns. */
export function logLinearPhrase(part: Extract<Part, { kind: 'log-linear' }>): string {
  return `the exponential of a linear function of ${list(part.terms.map(termName))}, its coefficients estimated with the rest`;
}

/** The same as signs, and in words. */
export function classesSigns(part: Extract<Part, { kind: 'per-class' }>, plan: Plan): readonly [string, string] {
  const n = plan.roles.designEffect === null ? 'n' : 'm';
  return part.perSize
    ? [`φ(${part.column}) / ${n}`, `phi of the cell's ${part.column} divided by ${n}`]
    : [`φ(${part.column})`, `phi of the cell's ${part.column}`];
}

/** variance: the fit's parameters, whose gammas are one a column, a category's being several. */
export function logLinearSigns(variance: readonly VarianceParameter[]): readonly [string, string] {
  const gammas = variance.filter(({ name }) => name.startsWith('gamma: '));
  const names = gammas.slice(1).map(({ name }) => name.slice('gamma: '.length));
  return [
    `exp(${['γ₀', ...names.map((name, i) => `γ${subscript(i + 1)}\u00a0${name}`)].join(' + ')})`,
    `the exponential of ${['gamma nought', ...names.map((name) => `gamma times ${name}`)].join(' plus ')}`,
  ];
}
