/** Every kind of expected trouble, with the facts that its sentence needs. The codes of the contract first, then those of the machine and the project file. */
export interface Troubles {
  // form: the plan or tabulation alone
  'not-json': { readonly line: number; readonly column: number };
  'wrong-format': { readonly found: unknown; readonly expected: string };
  'unknown-key': { readonly found: string; readonly nearest: string | null };
  'unknown-kind': { readonly found: unknown; readonly nearest: string | null };
  'missing-key': { readonly key: string };
  'wrong-type': { readonly found: JsonType; readonly expected: string };
  'empty-list': { readonly key: string };
  'out-of-range': { readonly found: number; readonly low: number | null; readonly high: number | null };
  'must-be-stated': { readonly key: string; readonly choices: readonly string[] | null };
  'not-together': { readonly keys: readonly string[] };
  'role-needed': { readonly role: string; readonly part: string };
  'nested-product': Record<string, never>;
  'equal-names': { readonly name: string; readonly first: string };
  'no-sampling-part': { readonly parts: readonly string[] };
  'two-sampling-parts': { readonly first: string; readonly second: string };
  'two-between-parts': { readonly first: string };
  'not-identified': { readonly parts: readonly string[] };
  'not-linear': { readonly part: string; readonly parameter: string };
  'correlated-cells': { readonly kind: string; readonly part: string; readonly by: readonly string[] };
  'unknown-parameter': { readonly found: string; readonly nearest: string | null };
  'not-increasing': { readonly column: string; readonly before: number; readonly found: number };
  'wrong-length': { readonly found: number; readonly expected: number };
  // data: the files
  'file-not-found': { readonly file: string };
  'unknown-column': { readonly found: string; readonly nearest: string | null };
  'reads-both-ways': {
    readonly file: string;
    readonly row: number;
    readonly column: string;
    readonly found: string;
    readonly settle: 'decimal' | 'group' | 'delimiter';
  };
  'not-a-number': { readonly file: string; readonly row: number; readonly column: string; readonly found: string };
  'empty-file': { readonly file: string };
  /** row (data row from 1, 0 for the header) and column: where U+0000 stands, which no encoding makes a table's text. */
  undecodable: {
    readonly file: string;
    readonly encoding: string;
    readonly offset: number;
    readonly row?: number;
    readonly column?: string;
  };
  'malformed-row': {
    readonly file: string;
    readonly row: number;
    readonly found: number | null;
    readonly expected: number;
  };
  'repeated-label': { readonly label: string; readonly rows: readonly number[] };
  'join-keys-repeated': {
    readonly file: string;
    readonly key: Readonly<Record<string, string>>;
    readonly rows: readonly number[];
  };
  'name-clash': { readonly column: string; readonly files: readonly string[] };
  'count-above-size': {
    readonly file: string;
    readonly row: number;
    readonly column: string;
    readonly found: string;
    readonly sizeColumn: string;
    readonly size: string;
  };
  'share-out-of-range': {
    readonly file: string;
    readonly row: number;
    readonly column: string;
    readonly found: string;
    readonly unit: string;
  };
  'transform-undefined': {
    readonly file: string;
    readonly row: number;
    readonly column: string;
    readonly found: string;
    readonly transform: string;
  };
  'order-repeats': {
    readonly column: string;
    readonly found: string;
    readonly group: Readonly<Record<string, string>>;
    readonly labels: readonly string[];
  };
  'matrix-labels': { readonly file: string; readonly missing: readonly string[]; readonly unknown: readonly string[] };
  'matrix-not-symmetric': {
    readonly file: string;
    readonly labels: readonly [string, string];
    readonly found: readonly [string, string];
  };
  'matrix-not-positive-definite': {
    readonly file: string;
    readonly labels: readonly [string, string] | null;
    readonly correlation: number | null;
    readonly smallestEigenvalue: number | null;
  };
  'no-cells-left': { readonly rows: number; readonly reasons: Readonly<Record<string, number>> };
  'weight-negative': { readonly file: string; readonly row: number; readonly column: string; readonly found: string };
  'one-psu-stratum': { readonly column: string; readonly strata: readonly string[] };
  'unknown-stratum': { readonly found: string; readonly nearest: string | null };
  // model: the terms and the structure on the used cells
  'fewer-cells-than-terms': { readonly cells: number; readonly coefficients: number };
  /** underWeights: the columns differ, but only in cells that weigh nothing beside the others. */
  'dependent-columns': { readonly coefficients: readonly string[]; readonly underWeights?: boolean };
  'one-level': { readonly column: string; readonly level: string };
  'cluster-cuts-block': {
    readonly by: readonly string[];
    readonly part: string;
    readonly partBy: readonly string[];
    readonly group: Readonly<Record<string, string>>;
  };
  'too-few-clusters': { readonly by: readonly string[]; readonly clusters: number };
  /** A cluster that alone decides a combination of coefficients: the correction divides by 0 there. */
  'cluster-decides': {
    readonly by: readonly string[];
    readonly group: Readonly<Record<string, string>>;
    readonly correction: string;
  };
  /** More cells tied to each other than one dense factor is taken of. */
  'block-too-large': { readonly cells: number; readonly most: number };
  'unknown-coefficient': { readonly found: string; readonly nearest: string | null };
  'leverage-one': { readonly labels: readonly string[]; readonly correction: string };
  'not-available': { readonly what: string };
  // the fit
  /** A variance parameter's likelihood has no maximum that the search could reach. */
  'no-convergence': { readonly parameter: string; readonly value: number; readonly iterations: number };
  /** At the fixed point means are not inside the range that their variances need. fitted: shares, or rates; high: null where there is none. */
  'fitted-outside': {
    readonly part: string;
    readonly labels: readonly string[];
    readonly fitted: readonly number[];
    readonly low: number;
    readonly high: number | null;
  };
  /** Cells of none or all that the terms tell apart from the others: the likelihood has no maximum. */
  separated: { readonly labels: readonly string[]; readonly coefficients: readonly string[] };
  /** Fitted means and their variances do not come to rest. */
  'not-settled': { readonly part: string; readonly rounds: number };
  /** Residuals are zero throughout, so that nothing of the scale can be estimated. */
  'nothing-left-over': { readonly cells: number; readonly coefficients: number };
  // usage
  'unknown-verb': { readonly found: string; readonly nearest: string | null };
  'unknown-option': { readonly found: string; readonly nearest: string | null };
  'missing-argument': { readonly verb: string; readonly argument: string };
  'surplus-argument': { readonly verb: string; readonly found: string };
  // the project file
  'not-a-project': { readonly file: string };
  'project-newer': { readonly file: string; readonly found: number; readonly known: number };
  'project-damaged': { readonly file: string; readonly finding: string };
  'trail-broken': { readonly entry: number; readonly finding: string };
  'edition-differs': {
    readonly edition: number;
    readonly what: string;
    readonly found: string;
    readonly expected: string;
  };
  'no-edition': { readonly file: string };
  'no-project': { readonly file: string };
  /** Something was asked of a project while none is open. */
  'nothing-open': Record<string, never>;
  /** A project stands where a table should be read. */
  'is-a-project': {
    readonly file: string;
    /** It can be opened by this name; else it has to be chosen. */
    readonly offered: boolean;
  };
  /** The open project's file was removed or moved. */
  'project-gone': { readonly file: string };
  /** Another file stands under the open project's name; the project itself lives on as long as it is open. */
  'project-replaced': { readonly file: string };
  /** The open project's own file was written by another program. */
  'project-overwritten': { readonly file: string };
  /** A file stands under the name of one that is to be made. */
  'already-there': { readonly file: string };
  'unknown-plan': { readonly found: number };
  'name-taken': { readonly name: string };
  // the machine
  'disk-full': { readonly file: string };
  'read-only': { readonly file: string };
  'no-permission': { readonly file: string };
  'file-in-use': { readonly file: string };
  'cannot-write': { readonly file: string; readonly reason: string };
  'cannot-read': { readonly file: string; readonly reason: string };
  /** A folder stands where a file should go, or the other way round. */
  'in-the-way': { readonly file: string; readonly wanted: 'file' | 'folder' };
  /** size, limit: in bytes. */
  'file-too-large': { readonly file: string; readonly size: number; readonly limit: number };
  /** A table of more rows or fields than is read into memory; counted before it is read, and roughly. */
  'table-too-large': {
    readonly file: string;
    readonly of: 'rows' | 'fields';
    readonly found: number;
    readonly limit: number;
  };
  /** Reading a table, or working on it, took all the memory that it may have. */
  'memory-full': { readonly file: string };
  cancelled: Record<string, never>;
  'fault-of-ours': { readonly message: string };
  // the window
  stranger: { readonly origin: string };
}

export type JsonType = 'string' | 'number' | 'boolean' | 'array' | 'object' | 'null';
export type Code = keyof Troubles;

/** Trouble as data. `at`: JSON pointer into the plan or payload, null where there is none. Its sentence is made in words/. */
export type Problem = {
  readonly [C in Code]: { readonly code: C; readonly at: string | null; readonly facts: Troubles[C] };
}[Code];

/** What happened, for a calling program: CONTRACT of the command line. */
export type ExitStatus = 0 | 1 | 2 | 3 | 4 | 5 | 6 | 7 | 130;

const exits: { readonly [C in Code]: ExitStatus } = {
  'not-json': 3,
  'wrong-format': 3,
  'unknown-key': 3,
  'unknown-kind': 3,
  'missing-key': 3,
  'wrong-type': 3,
  'empty-list': 3,
  'out-of-range': 3,
  'must-be-stated': 3,
  'not-together': 3,
  'role-needed': 3,
  'nested-product': 3,
  'equal-names': 3,
  'no-sampling-part': 3,
  'two-sampling-parts': 4,
  'two-between-parts': 4,
  'not-identified': 4,
  'not-linear': 4,
  'correlated-cells': 4,
  'unknown-parameter': 3,
  'not-increasing': 3,
  'wrong-length': 3,
  'file-not-found': 3,
  'unknown-column': 3,
  'reads-both-ways': 3,
  'not-a-number': 3,
  'empty-file': 3,
  undecodable: 3,
  'malformed-row': 3,
  'repeated-label': 3,
  'join-keys-repeated': 3,
  'name-clash': 3,
  'count-above-size': 3,
  'share-out-of-range': 3,
  'transform-undefined': 3,
  'order-repeats': 3,
  'matrix-labels': 3,
  'matrix-not-symmetric': 3,
  'matrix-not-positive-definite': 3,
  'no-cells-left': 4,
  'weight-negative': 3,
  'one-psu-stratum': 4,
  'unknown-stratum': 3,
  'fewer-cells-than-terms': 4,
  'dependent-columns': 4,
  'one-level': 4,
  'cluster-cuts-block': 4,
  'too-few-clusters': 4,
  'block-too-large': 4,
  'cluster-decides': 4,
  'unknown-coefficient': 3,
  'leverage-one': 4,
  'not-available': 4,
  'no-convergence': 4,
  'fitted-outside': 4,
  separated: 4,
  'not-settled': 4,
  'nothing-left-over': 4,
  'unknown-verb': 2,
  'unknown-option': 2,
  'missing-argument': 2,
  'surplus-argument': 2,
  'not-a-project': 3,
  'project-newer': 3,
  'project-damaged': 3,
  'trail-broken': 5,
  'edition-differs': 5,
  'no-edition': 3,
  'no-project': 3,
  'nothing-open': 3,
  'is-a-project': 3,
  'project-gone': 6,
  'project-replaced': 6,
  'project-overwritten': 6,
  'already-there': 3,
  'unknown-plan': 3,
  'name-taken': 3,
  'disk-full': 6,
  'read-only': 6,
  'no-permission': 6,
  'file-in-use': 6,
  'cannot-write': 6,
  'cannot-read': 6,
  'in-the-way': 6,
  'file-too-large': 3,
  'table-too-large': 3,
  'memory-full': 6,
  cancelled: 130,
  'fault-of-ours': 1,
  stranger: 1,
};

export function exitStatusOf(code: Code): ExitStatus {
  return exits[code];
}
