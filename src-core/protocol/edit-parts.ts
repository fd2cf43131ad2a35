import type { NamedInput } from './bridge';
import type { DraftPlan } from './draft';
import { withBetween, withSampling } from './edit-structure';
import { means, namedParameters } from './parameter-names';
import type { Correlation, Part, PartKind, Plan, Rival, SimpleTerm, Tests, Variance } from './plan';

/** What a new part needs of its maker besides its kind: where nothing is said, the plainest that stands. */
export interface Making {
  /** The column of a proxy or of classes. */
  readonly column?: string;
  readonly file?: string;
  readonly scale?: 'fixed' | 'free';
  readonly by?: readonly string[];
  readonly terms?: readonly SimpleTerm[];
}

/** A part of a kind; its scale, where it has one, as said or else free. */
export function partOf(
  kind: PartKind,
  { column = '', file = '', scale = 'free', by = [], terms = [] }: Making = {},
): Part {
  switch (kind) {
    case 'constant':
    case 'per-size':
    case 'between':
      return { kind, correlation: null };
    case 'given':
      return { kind, scale, freedom: null, correlation: null };
    case 'matrix':
      return { kind, file, scale, freedom: null };
    case 'size-power':
      return { kind, exponent: 'estimate', correlation: null };
    case 'proxy':
      return { kind, column, exponent: 1, correlation: null };
    case 'log-linear':
      return { kind, terms: [...terms], correlation: null };
    case 'per-class':
      return { kind, column, perSize: false, correlation: null };
    case 'binomial':
    case 'counts':
      return { kind, scale, correlation: null };
    case 'shared':
      return { kind, by: [...by] };
  }
}

/** A part with its cells correlated in a way, or not. A matrix and a shared part say themselves how cells go together. */
export function withCorrelation(part: Part, correlation: Correlation | null): Part {
  return part.kind === 'matrix' || part.kind === 'shared' ? part : { ...part, correlation };
}

/** The correlation of a part; null where it has none, or can have none. */
export function correlationIn(part: Part): Correlation | null {
  return 'correlation' in part ? part.correlation : null;
}

/** The same structure with one part more, at its end. */
export function withMore(variance: Variance, part: Part): Variance {
  return { parts: [...variance.parts, part], fixed: variance.fixed };
}

/** The same structure with its cells independent of one another, as far as parts can say that: a matrix stays. */
export function withoutTogether({ parts, fixed }: Variance): Variance {
  const alone = parts.filter(({ kind }) => kind !== 'shared').map((part) => withCorrelation(part, null));
  const names = namedParameters({ parts: alone });
  const kept = Object.entries(fixed).filter(([name]) => names.some((one) => means(name, one)));
  return { parts: alone, fixed: Object.fromEntries(kept) };
}

/** The same structure on another sampling part; a between part that could not be told from it goes. */
export function onSampling(variance: Variance, part: Part): Variance {
  const next = withSampling(variance, part);
  const flat = part.kind === 'constant' || (part.kind === 'per-class' && !part.perSize);
  return flat && correlationIn(part)?.kind !== 'serial' ? withBetween(next, false) : next;
}

/** Whether cells go together by a part other than a matrix. */
export function isTogether({ parts }: Pick<Variance, 'parts'>): boolean {
  return parts.some((part) => part.kind === 'shared' || correlationIn(part) !== null);
}

/** What the tests look at, with one of its keys said anew; null where nothing is said. */
export function withTests(plan: Plan, change: Partial<Tests>): Plan {
  const tests = { columns: null, whiteColumns: null, neighbours: null, ...plan.tests, ...change };
  const isSaid = tests.columns !== null || tests.whiteColumns !== null || tests.neighbours !== null;
  return { ...plan, tests: isSaid ? tests : null };
}

/** A rival in another's place. */
export function withRivalAt(plan: Plan, index: number, rival: Rival): Plan {
  return { ...plan, beside: plan.beside.with(index, rival) };
}

/** Every name by which a plan names a file, once for each place that names it. */
export function fileNames({ data, variance, target, beside, tests }: Plan | DraftPlan): string[] {
  const structures = [variance, target, ...beside].filter((one) => one !== null && typeof one !== 'string');
  const matrices = structures.flatMap(({ parts }) =>
    parts.flatMap((part) => (part.kind === 'matrix' ? [part.file] : [])),
  );
  const neighbours = tests?.neighbours ?? null;
  return [data.file, ...data.join.map(({ file }) => file), ...matrices, ...(neighbours === null ? [] : [neighbours])];
}

/**
 * A file that came for one place of a plan, under a name that no other file of the plan has, and the plan's files with it.
 *
 * before: the name that the place has now, null for none: it may be taken again, where no other place has it.
 */
export function withFile(
  file: NamedInput,
  {
    plan,
    inputs,
    before,
  }: { readonly plan: Plan | DraftPlan; readonly inputs: readonly NamedInput[]; readonly before: string | null },
): { readonly name: string; readonly inputs: readonly NamedInput[] } {
  const names = fileNames(plan);
  const own = before === null ? -1 : names.indexOf(before);
  const taken = new Set(own < 0 ? names : names.toSpliced(own, 1));
  const isOther = (name: string) =>
    taken.has(name) && inputs.some((one) => one.name === name && one.sha256 !== file.sha256);
  const [, stem = file.name, ending = ''] = /^(.+?)(\.[^.]*)?$/u.exec(file.name) ?? [];
  let { name } = file;
  for (let n = 2; isOther(name); n++) name = `${stem} (${n})${ending}`;
  return { name, inputs: [...inputs.filter((one) => one.name !== name), { name, sha256: file.sha256 }] };
}
