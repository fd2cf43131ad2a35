import type { Part, Rival, Variance } from '../protocol/plan';
import { exact } from './numbers';

/** A variance structure in as few words as a table's column takes: "per size + between", "constant", "size power 0.5". */
export function structureName(rival: Rival): string {
  if (rival === 'given') return 'given × φ';
  if (typeof rival === 'string') return wordOf[rival];
  const fixed = Object.entries(rival.fixed).map(([name, value]) => `${parameterSign(name)} = ${exact(value)}`);
  return [rival.parts.map(partName).join(' + '), ...fixed].join(', ');
}

const wordOf = { constant: 'constant', 'per-size': 'per size' } as const;

function partName(part: Part): string {
  const own = ownName(part);
  if (!('correlation' in part) || part.correlation === null) return own;
  const { kind, by } = part.correlation;
  return by.length === 0 ? `${own} (${kind})` : `${own} (${kind} by ${by.join(' × ')})`;
}

function ownName(part: Part): string {
  switch (part.kind) {
    case 'constant':
    case 'per-size':
      return wordOf[part.kind];
    case 'given':
    case 'matrix':
    case 'binomial':
    case 'counts':
      return part.scale === 'free' ? `${part.kind} × φ` : part.kind;
    case 'size-power':
      return `size power ${part.exponent === 'estimate' ? 'δ' : exact(part.exponent)}`;
    case 'proxy':
      return `${part.column} power ${part.exponent === 'estimate' ? 'δ' : exact(part.exponent)}`;
    case 'log-linear':
      return 'log-linear';
    case 'per-class':
      return part.perSize ? `by ${part.column}, per size` : `by ${part.column}`;
    case 'between':
      return 'between';
    case 'shared':
      return `shared by ${part.by.join(' × ')}`;
  }
}

/** What a structure's weights are called in a sentence: "equal weights", "weights by size". */
export function weightsOf(rival: Rival): string {
  if (rival === 'constant') return 'equal weights';
  if (rival === 'per-size') return 'weights by size';
  if (rival === 'given') return 'weights by the given errors';
  const [only, ...more] = rival.parts;
  if (more.length === 0 && Object.keys(rival.fixed).length === 0) {
    if (only?.kind === 'constant' || only?.kind === 'per-size' || only?.kind === 'given') return weightsOf(only.kind);
    if (only?.kind === 'size-power' && only.exponent !== 'estimate')
      return `weights by size to the power ${exact(only.exponent)}`;
    if (only?.kind === 'proxy') return `weights by ${only.column}`;
  }
  return `the weights of “${structureName(rival)}”`;
}

/** The sign of a variance parameter by its result name: "τ²", "φ", "ω² (region)". */
export function parameterSign(name: string): string {
  const [start = '', ...rest] = name.split(': ');
  const sign = signs[start] ?? start;
  return rest.length === 0 ? sign : `${sign} (${rest.join(': ')})`;
}

const signs: { readonly [name: string]: string } = {
  phi: 'φ',
  tau2: 'τ²',
  delta: 'δ',
  gamma: 'γ',
  omega2: 'ω²',
  rho: 'ρ',
};

/** What a variance parameter is, in words. */
export function parameterMeaning(name: string, { parts }: Variance): string {
  const [start = '', ...rest] = name.split(': ');
  const of = rest.length === 0 ? undefined : rest.join(': ');
  const sampling = parts.find(({ kind }) => kind !== 'between' && kind !== 'shared');
  switch (start) {
    case 'phi':
      if (of !== undefined) return `variance where ${'column' in (sampling ?? {}) ? `the class is ${of}` : of}`;
      return scaleMeaning(sampling?.kind ?? 'constant');
    case 'tau2':
      return 'variance between cells beyond sampling';
    case 'delta':
      return sampling?.kind === 'proxy' ? `exponent of ${sampling.column}` : 'exponent of size';
    case 'gamma':
      return `log-linear coefficient of ${of}`;
    case 'omega2':
      return `variance shared within ${of}`;
    case 'rho':
      return `correlation of the part “${of}”`;
    default:
      return name;
  }
}

function scaleMeaning(kind: Part['kind']): string {
  switch (kind) {
    case 'constant':
      return 'variance of every cell';
    case 'per-size':
      return 'variance of one respondent’s answer';
    case 'given':
    case 'matrix':
      return 'factor on the given variances';
    case 'binomial':
    case 'counts':
      return 'factor on the sampling variance';
    default:
      return 'scale of the variances';
  }
}

/** A structure's name as `result.overturn` writes it ("size-power 0.5 + between"), in the words of this report. */
export function structureFromKinds(what: string): string {
  if (what === 'given') return structureName('given');
  const [kinds = '', ...fixed] = what.split(', ');
  const parts = kinds.split(' + ').map((part) => {
    const [kind = '', exponent] = part.split(' ');
    if (kind === 'size-power') return `size power ${exponent ?? 'δ'}`;
    return part.replace(/^per-size$/, 'per size');
  });
  return [parts.join(' + '), ...fixed].join(', ');
}

/** Whether some part of a structure lets cells go together. */
export function tiesCells({ parts }: Pick<Variance, 'parts'>): boolean {
  return parts.some((part) => part.kind === 'shared' || part.kind === 'matrix' || part.correlation !== null);
}
