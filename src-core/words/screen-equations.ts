import type { Correlation, Part, Plan } from '../protocol/plan';
import { interceptName } from '../protocol/term-names';
import { exact } from './numbers';

/** Mathematics as a tree of MathML elements: a leaf has text, all others have children. */
export type MathNode =
  | { readonly tag: 'mi' | 'mn' | 'mo' | 'mtext'; readonly text: string }
  | { readonly tag: 'mrow' | 'msub' | 'msup' | 'msqrt' | 'mfrac'; readonly children: readonly MathNode[] };

const mi = (text: string): MathNode => ({ tag: 'mi', text });
const mo = (text: string): MathNode => ({ tag: 'mo', text });
const mtext = (text: string): MathNode => ({ tag: 'mtext', text });
const row = (...children: MathNode[]): MathNode => ({ tag: 'mrow', children });
const sub = (base: MathNode, below: MathNode): MathNode => ({ tag: 'msub', children: [base, below] });
const sup = (base: MathNode, above: MathNode): MathNode => ({ tag: 'msup', children: [base, above] });
const over = (top: MathNode, below: MathNode): MathNode => ({ tag: 'mfrac', children: [top, below] });

const cell = mi('g');
const squared = (base: MathNode): MathNode => sup(base, { tag: 'mn', text: '2' });

/** Left of the sum: the variance of a cell's error. */
export const varianceHead: MathNode = row(mi('Var'), mo('('), sub(mi('u'), cell), mo(')'), mo('='));

/** One part of a structure as it stands in the sum of variances. */
export function partMath(part: Part, { roles }: { readonly roles: Plan['roles'] | null }): MathNode {
  const own = ownMath(part, sub(mi(roles?.designEffect == null ? 'n' : 'm'), cell));
  if (!('correlation' in part) || part.correlation === null) return own;
  const { kind, by } = part.correlation;
  const name = by.length === 0 ? kind : `${kind} by ${by.join(' × ')}`;
  return row(own, mtext(`\u00a0(${name})`));
}

function ownMath(part: Part, size: MathNode): MathNode {
  const phi = mi('φ');
  switch (part.kind) {
    case 'constant':
      return phi;
    case 'per-size':
      return over(phi, size);
    case 'given':
    case 'matrix': {
      const errors = part.kind === 'given' ? squared(sub(mi('s'), cell)) : sub(mi('S'), row(cell, cell));
      return part.scale === 'free' ? row(phi, errors) : errors;
    }
    case 'size-power':
      return over(phi, sup(size, exponent(part.exponent)));
    case 'proxy':
      return row(phi, sup(sub(mtext(part.column), cell), exponent(part.exponent)));
    case 'log-linear':
      return row(mi('exp'), mo('('), sub(mi('z'), cell), mi('γ'), mo(')'));
    case 'per-class':
      return part.perSize ? over(sub(phi, mtext(part.column)), size) : sub(phi, mtext(part.column));
    case 'binomial':
      return row(
        ...(part.scale === 'free' ? [phi] : []),
        over(row(sub(mi('μ'), cell), mo('('), { tag: 'mn', text: '1' }, mo('−'), sub(mi('μ'), cell), mo(')')), size),
      );
    case 'counts':
      return row(...(part.scale === 'free' ? [phi] : []), over(sub(mi('μ'), cell), sub(mi('e'), cell)));
    case 'between':
      return squared(mi('τ'));
    case 'shared':
      return sub(squared(mi('ω')), mtext(part.by.join(' × ')));
  }
}

/** Left of the sum: the covariance of the errors of two cells. */
const covarianceHead: MathNode = row(
  mi('Cov'),
  mo('('),
  sub(mi('u'), cell),
  mo(','),
  sub(mi('u'), mi('h')),
  mo(')'),
  mo('='),
);

/** The covariance of two cells as a sum over the parts that tie them; null where cells are independent. */
export function covarianceMath(parts: readonly Part[]): readonly MathNode[] | null {
  const ties = parts.flatMap((part) => tieMath(part) ?? []);
  if (ties.length === 0) return null;
  return [covarianceHead, ...ties.flatMap((tie, i) => (i === 0 ? [tie] : [mo('+'), tie]))];
}

function tieMath(part: Part): MathNode | null {
  switch (part.kind) {
    case 'matrix':
      return row(...(part.scale === 'free' ? [mi('φ')] : []), sub(mi('S'), row(cell, mi('h'))));
    case 'shared':
      return row(squared(mi('ω')), sameMath(part.by));
    default:
      return part.correlation === null ? null : correlatedMath(part, part.correlation);
  }
}

function correlatedMath({ kind }: Part, correlation: Correlation): MathNode {
  const rho =
    correlation.kind === 'exchangeable'
      ? mi('ρ')
      : sup(mi('ρ'), row(mo('|'), mi('Δ'), mtext(correlation.order), mo('|')));
  const variances: MathNode =
    kind === 'between'
      ? squared(mi('τ'))
      : { tag: 'msqrt', children: [row(sub(mi('v'), cell), sub(mi('v'), mi('h')))] };
  return row(rho, variances, sameMath(correlation.by));
}

/** In brackets what two cells must have in common; nothing where that is nothing. */
function sameMath(by: readonly string[]): MathNode {
  return by.length === 0 ? row() : mtext(`\u00a0[same ${by.join(' × ')}]`);
}

function exponent(value: number | 'estimate'): MathNode {
  return value === 'estimate' ? mi('δ') : { tag: 'mn', text: exact(value) };
}

/** One coefficient times its column; the constant is its coefficient alone. index: its place among the coefficients, the constant 0. */
export function coefficientMath(name: string, index: number): MathNode {
  const beta = sub(mi('β'), { tag: 'mn', text: exact(index) });
  return name === interceptName && index === 0 ? beta : row(beta, mtext(`\u00a0${name}`));
}

/** Before a term that is a category, or holds one: it has a coefficient for each of its levels. */
export const levelsMath: MathNode = sub(mi('β'), mtext('…'));

export const errorMath: MathNode = sub(mi('u'), cell);
