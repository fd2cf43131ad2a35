import type { Rival, Variance } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';

/** One structure that a fit tried, chosen or beside: its canonical text, and what each coefficient was under it. */
export interface Tried {
  readonly structure: string;
  readonly coefficients: readonly (readonly [term: string, estimate: number])[];
}

/** Structures that were tried, each counted once, and how far each coefficient ran over them. */
export interface StructuresTried {
  readonly count: number;
  /** Of them, first tried before the answer was uncovered, and with it in view. */
  readonly before: number;
  readonly after: number;
  readonly ranges: readonly { readonly term: string; readonly low: number; readonly high: number }[];
}

/** Every structure of a result: the chosen one first, then those beside it. */
export function structuresIn(result: Pick<Result, 'plan' | 'fit' | 'beside'>): readonly Tried[] {
  const all = [
    { variance: result.plan.variance, coefficients: result.fit.coefficients },
    ...result.beside.map(({ variance, coefficients }) => ({ variance, coefficients })),
  ];
  return all.map(({ variance, coefficients }) => ({
    structure: canonical(variance),
    coefficients: coefficients.map(({ term, estimate }) => [term, estimate] as const),
  }));
}

/** The same text for the same structure: a rival's word written out, parts and fixed parameters in one order. */
function canonical(variance: Rival): string {
  const { parts, fixed } = typeof variance === 'string' ? ofWord(variance) : variance;
  const inOrder = parts.map((part) => JSON.stringify(part)).sort();
  const set = Object.entries(fixed).sort(([a], [b]) => (a < b ? -1 : 1));
  return JSON.stringify([inOrder, set]);
}

function ofWord(word: Extract<Rival, string>): Variance {
  if (word === 'given')
    return { parts: [{ kind: 'given', scale: 'free', freedom: null, correlation: null }], fixed: {} };
  return { parts: [{ kind: word, correlation: null }], fixed: {} };
}

/** fits: in the order in which they were kept, with whether the answer was in view. */
export function countStructures(
  fits: readonly { readonly tried: readonly Tried[]; readonly inView: boolean }[],
): StructuresTried {
  const seen = new Map<string, boolean>();
  const ranges = new Map<string, { low: number; high: number }>();
  for (const { tried, inView } of fits)
    for (const { structure, coefficients } of tried) {
      if (!seen.has(structure)) seen.set(structure, inView);
      for (const [term, estimate] of coefficients) {
        const range = ranges.get(term) ?? { low: estimate, high: estimate };
        ranges.set(term, { low: Math.min(range.low, estimate), high: Math.max(range.high, estimate) });
      }
    }
  const after = [...seen.values()].filter((inView) => inView).length;
  return {
    count: seen.size,
    before: seen.size - after,
    after,
    ranges: [...ranges].map(([term, range]) => ({ term, ...range })),
  };
}
