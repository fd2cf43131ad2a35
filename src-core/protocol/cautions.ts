import type { CautionGroup, ChangeKind } from './result';

/** How far a finding moves a coefficient; inErrors: in standard errors of the chosen fit, null where that error is undefined. */
export type Shift = { term: string; from: number; to: number; inErrors: number | null };

/** One structure test that rejects. by: the columns that pair cells, for dependence alone. */
export type RejectingTest = {
  test: string;
  statistic: number | null;
  freedom1: number | null;
  freedom2: number | null;
  p: number | null;
  by: string[] | null;
};

/** What each caution's sentence needs: numbers and names only, the sentences are in words/. */
export type CautionFacts = {
  // changes the answer
  /** A check that the program ran on the user's own data failed. */
  'self-check-failed': { check: string; figure: number | null };
  'few-digits': { digits: number; condition: number };
  /** Of the changes tried, `crossing` take a coefficient across zero or the difference that matters; the largest is told. */
  overturned: {
    term: string;
    kind: ChangeKind;
    what: string;
    estimate: number;
    low: number | null;
    high: number | null;
    crosses: 'zero' | 'matters';
    crossing: number;
    tried: number;
    shift: Shift | null;
  };
  /** phi: what the scale would be were it free. */
  'scale-contradicted': { statistic: number; freedom: number; p: number; phi: number };
  'structure-rejected': { tests: RejectingTest[]; shift: Shift | null };
  'dependence-found': { tests: RejectingTest[] };
  /** DuMouchel-Duncan: an alarm about the terms, not advice to weight. */
  'weighting-changes-answer': {
    statistic: number | null;
    freedom1: number | null;
    freedom2: number | null;
    p: number;
    shift: Shift | null;
  };
  'weights-concentrated': {
    effectiveCells: number;
    cells: number;
    heaviest: string;
    heaviestShare: number;
    shift: Shift | null;
  };
  /** rules: what the other rules say of the same parameter, where they were tried. */
  'variance-at-boundary': { name: string; rules: { rule: string; tau2: number }[]; shift: Shift | null };
  'robust-differs': { terms: { term: string; ratio: number }[] };
  /** Coefficients that were told from zero, and are not over all admissible values. sign: whether even the sign turns; cells: with uncertain values. */
  'bounds-undo': {
    terms: { term: string; low: number | null; high: number | null; sign: boolean }[];
    cells: number;
    shift: Shift | null;
  };
  // limits the claim
  'no-residual-freedom': { cells: number; coefficients: number };
  'leave-one-out-undefined': { residualFreedom: number };
  'leverage-one': { labels: string[] };
  'freedom-below-four': { terms: { term: string; freedom: number }[] };
  /** Fewer than ten clusters, by the grouping that has fewest. */
  'few-clusters': { by: string[]; clusters: number };
  /** Errors clustered two ways whose variance comes out below 0. */
  'two-ways-below-zero': { terms: string[]; by: string[]; alsoBy: string[] };
  /** Coefficients with an error under CR2 that the clusters cannot judge: nothing is left of it between them. */
  'clusters-cannot-judge': { terms: string[]; by: string[] };
  /** Every cell goes together with every other, so that robust errors by blocks cannot be formed. */
  'one-block': { cells: number };
  /** Kenward and Roger's correction where the information of the variance parameters is singular. */
  'correction-undefined': { parameters: string[] };
  /** A given matrix that is an estimate on this freedom. inverted: whether weights come from its inverse; noisy: fewer than ten times as many as cells. */
  'matrix-estimated': { freedom: number; cells: number; inverted: boolean; noisy: boolean };
  /** betweenAtZero: tau^2 is 0, so that the factor alone made the interval narrower. */
  'knapp-hartung-narrowed': { q: number; betweenAtZero: boolean };
  'between-interval-empty': { rules: string[] };
  'parameters-hardly-separate': { first: string; second: string; correlation: number };
  /** Freedom of the given errors over the used cells. noisy: the median is below 30. */
  'errors-estimated': { median: number; low: number; high: number; noisy: boolean };
  /** cause: how the outcome enters its own error; minimum-chi-square: by the weights of empirical logits or logs. */
  'errors-from-outcome': { cause: 'cv' | 'log' | 'logit' | 'share' | 'count' | 'minimum-chi-square' };
  /** Cells to whose counts halves were added, so that their logits exist: of extreme cells alone, or of all. */
  'halves-added': { to: 'extreme-cells' | 'all-cells'; cells: number; labels: string[] };
  'log-of-means': Record<string, never>;
  /** Coefficients of variation above 1: often a percentage written as a number, or an estimate that says little. */
  'variation-above-one': { column: string; cells: number; largest: number };
  /** bounded: of them, those that the bounds take in. */
  'cells-suppressed': { cells: number; labels: string[]; bounded: number };
  /** Columns with limits that enter the fit where no bound follows them: as sizes, errors, exposures, parts or in derived columns. failed: none of the bounds could be had. */
  'limits-not-followed': { columns: string[]; failed: boolean };
  'term-constant-within-groups': { term: string; column: string; groups: number; cells: number };
  /** column: the label column whose groups are counted, null where cells are. */
  'term-carried-by-few': { term: string; column: string | null; count: number };
  'residuals-not-normal': { statistic: number | null; p: number };
  'dependence-not-tested': { cells: number };
  // for the record
  'structures-tried': { tried: number; ranges: { term: string; low: number; high: number }[] };
  'errors-taken-as-exact': { cells: number };
  'cells-omitted': { rows: number; used: number; omitted: number; reasons: { [code: string]: number } };
  /** Used values whose source marks them. */
  'values-marked': {
    column: string;
    status: 'rounds-to-zero' | 'provisional' | 'estimated' | 'low-reliability';
    cells: number;
  };
  'join-unmatched': { file: string; ours: number; theirs: number };
  /** shift: the largest that sizes moved that far can do. */
  'sizes-within': { within: number; shift: Shift | null };
  /** Labels that differ by characters nobody sees. */
  'labels-look-alike': { labels: string[]; rows: number[] };
};

export type CautionCode = keyof CautionFacts;

/**
 * Every caution with its group; `errors-estimated` stands for the record where the errors carry 30 degrees of freedom or more.
 * The two standing remarks at a report's end are not among them: they are printed whatever the data.
 */
export const cautionGroups: { readonly [C in CautionCode]: CautionGroup } = {
  'self-check-failed': 'changes-answer',
  'few-digits': 'changes-answer',
  overturned: 'changes-answer',
  'scale-contradicted': 'changes-answer',
  'structure-rejected': 'changes-answer',
  'dependence-found': 'changes-answer',
  'weighting-changes-answer': 'changes-answer',
  'weights-concentrated': 'changes-answer',
  'variance-at-boundary': 'changes-answer',
  'robust-differs': 'changes-answer',
  'bounds-undo': 'changes-answer',
  'no-residual-freedom': 'limits-claim',
  'leave-one-out-undefined': 'limits-claim',
  'leverage-one': 'limits-claim',
  'freedom-below-four': 'limits-claim',
  'few-clusters': 'limits-claim',
  'two-ways-below-zero': 'limits-claim',
  'clusters-cannot-judge': 'limits-claim',
  'one-block': 'limits-claim',
  'correction-undefined': 'limits-claim',
  'matrix-estimated': 'limits-claim',
  'knapp-hartung-narrowed': 'limits-claim',
  'between-interval-empty': 'limits-claim',
  'parameters-hardly-separate': 'limits-claim',
  'errors-estimated': 'limits-claim',
  'errors-from-outcome': 'limits-claim',
  'halves-added': 'limits-claim',
  'log-of-means': 'limits-claim',
  'variation-above-one': 'limits-claim',
  'cells-suppressed': 'limits-claim',
  'limits-not-followed': 'limits-claim',
  'term-constant-within-groups': 'limits-claim',
  'term-carried-by-few': 'limits-claim',
  'residuals-not-normal': 'limits-claim',
  'dependence-not-tested': 'limits-claim',
  'structures-tried': 'for-record',
  'errors-taken-as-exact': 'for-record',
  'cells-omitted': 'for-record',
  'values-marked': 'for-record',
  'join-unmatched': 'for-record',
  'sizes-within': 'for-record',
  'labels-look-alike': 'for-record',
};

/** All codes, in the order in which cautions of one group stand where no shift ranks them. */
export const cautionCodes: readonly CautionCode[] = Object.keys(cautionGroups) as CautionCode[];

/** The checks that a result carries about itself. */
export const selfCheckCodes = [
  'rows-reversed',
  'sizes-scaled',
  'errors-scaled',
  'outcome-unit-changed',
  'column-unit-changed',
  'cell-split',
  'residuals-orthogonal',
  'leverages-sum',
  'pulls-sum',
  'other-route',
  'price-not-negative',
  'leave-one-out-extreme',
  'heaviest-deleted',
  'digits',
] as const;

export type SelfCheckCode = (typeof selfCheckCodes)[number];
