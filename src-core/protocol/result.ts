import type { Estimate, Inference, MomentRule, Plan, Question, Rival } from './plan';

/**
 * The result of one fit (steelyard-result/1), one JSON value. Undefined quantities are null, with a caution.
 * Vectors over terms follow coefficient order; vectors over cells are the used cells in data order.
 */
export interface Result {
  format: 'steelyard-result/1';
  plan: Plan;
  data: DataUsed;
  fit: FitResult;
  robustBeside: RobustBeside[] | null;
  /** What the respondents' own least squares would give; null where no deviations inside cells are given. */
  individualLevel: IndividualLevel | null;
  cells: CellResult[];
  effectiveCells: number | null;
  beside: BesideResult[];
  square: SquareEntry[];
  breakEven: BreakEven[];
  intraclass: Interval | null;
  evidence: Evidence[];
  betweenRules: BetweenRule[];
  questions: QuestionResult[];
  beam: Beam[];
  exponentScan: ScanPoint[];
  exponentSupport: ExponentSupport | null;
  bounds: Bound[];
  commonCorrelation: CommonCorrelation[];
  /** By coefficient, in their order; null in results of before it was told. */
  whatItTakes: WhatItTakes[] | null;
  /** One for each set of variances or correlations whose vanishing was tested by draws; null where none was. */
  bootstrapTau2: BootstrapBoundary[] | null;
  overturn: Overturn[];
  selfChecks: SelfCheck[];
  cautions: Caution[];
  made: { version: string };
}

export interface DataUsed {
  /** Data rows in the file. */
  rows: number;
  used: number;
  omitted: Omitted[];
  files: { name: string; sha256: string }[];
  unmatched: { file: string; side: 'ours' | 'theirs'; key: Record<string, string> }[];
}

export interface Omitted {
  /** Data row from 1. */
  row: number;
  label: string;
  reason: { code: OmissionCode; column: string; text: string };
}

export type OmissionCode =
  | 'omit-rule'
  | 'missing'
  | 'not-above-zero'
  | 'suppressed-confidential'
  | 'suppressed-unreliable'
  | 'suppressed-unknown'
  | 'not-collected'
  | 'not-applicable'
  | 'interval'
  | 'blank';

export interface Reference {
  kind: 't' | 'normal';
  freedom: number | null;
}

export interface Interval {
  estimate: number;
  low: number | null;
  high: number | null;
}

export interface Coefficient {
  term: string;
  estimate: number;
  low: number | null;
  high: number | null;
  se: number | null;
  reference: Reference | null;
  ratio: number | null;
  p: number | null;
}

export interface CarriedBy {
  term: string;
  /** Cells on which the term's variation rests. */
  cells: number;
  by: { column: string; groups: number; constantWithin: boolean }[];
}

export interface VarianceParameter {
  name: string;
  estimate: number | null;
  se: number | null;
  low: number | null;
  high: number | null;
  atBoundary: boolean;
  fixed: boolean;
}

export interface FitResult {
  estimate: Estimate;
  inference: Inference;
  coefficients: Coefficient[];
  covariance: (number | null)[][];
  carriedBy: CarriedBy[];
  variance: VarianceParameter[];
  residualSd: number | null;
  weightedRss: number;
  residualFreedom: number;
  logLikelihood: number | null;
  restrictedLogLikelihood: number | null;
  aic: number | null;
  aicc: number | null;
  bic: number | null;
  rSquared: { weighted: number | null; adjusted: number | null; raw: number | null; centred: boolean };
  chiSquare: { statistic: number; freedom: number; p: number | null } | null;
  deviance: number | null;
  knappHartungQ: number | null;
  tau2Bias: number | null;
  wild: { term: string; count: number; p: number; floor: number }[] | null;
  digits: number;
  condition: number;
  converged: boolean;
  startsTried: number;
  errorFreedom: { median: number; low: number; high: number } | null;
  /** Share of sampling in the variance of a cell of median size; null where no between part stands. */
  samplingShare: number | null;
}

export interface RobustBeside {
  term: string;
  se: number | null;
  ratioToModel: number | null;
}

/** Least squares on the respondents themselves, from means, sizes and deviations inside cells. */
export interface IndividualLevel {
  coefficients: Coefficient[];
  /** Sum of sizes. */
  persons: number;
  /** Persons less coefficients. */
  residualFreedom: number;
  residualSd: number | null;
  /** Of persons, not of averages. */
  rSquared: number | null;
  /** Pooled over cells; null with one person a cell. */
  withinSd: number | null;
  /** Whether cells scatter around the terms by more than their persons do inside them. */
  lackOfFit: { statistic: number; freedom1: number; freedom2: number; p: number } | null;
}

export interface CellResult {
  label: string;
  size: number | null;
  effectiveSize: number | null;
  /** v_g, scale included. */
  variance: number;
  observed: number;
  fitted: number;
  residual: number;
  /** Free scale left out. */
  whitened: number;
  leverage: number;
  studentised: number | null;
  studentisedWithout: number | null;
  cookDistance: number | null;
  fitShift: number | null;
  coefficientShifts: (number | null)[];
  covarianceRatio: number | null;
  /** 1 / variance, free scale left out. */
  weight: number;
  weightShare: number;
  shrunken: number | null;
  ownShare: number | null;
  mse: number | null;
  mseParts: [number | null, number | null, number | null] | null;
}

export interface Price {
  term: string;
  claimedSe: number | null;
  expectedClaimedSe: number | null;
  /** Null where as many cells as terms leave the fitted scale undefined; so is what stands on it below. */
  actualSe: number | null;
  /** Null where Omega has no inverse: no weighting is best. */
  cost: number | null;
  claimedOverActual: number | null;
}

export interface BesideResult {
  variance: Rival;
  parameters: VarianceParameter[];
  variances: number[];
  logLikelihood: number | null;
  restrictedLogLikelihood: number | null;
  coefficients: Coefficient[];
  price: Price[];
  actualCovariance: (number | null)[][];
  eigenvalues: (number | null)[];
  efficiency: number | null;
  moved: { term: string; byCell: number[] }[];
}

/** truth, weighting: 0 is the chosen structure, then the rivals in order. */
export interface SquareEntry {
  truth: number;
  weighting: number;
  term: string;
  se: number | null;
}

export interface BreakEven {
  term: string;
  intraclass: number | null;
}

export type EvidenceTest =
  | 'breusch-pagan'
  | 'koenker'
  | 'size-score'
  | 'size-score-studentised'
  | 'size-slope'
  | 'white'
  | 'goldfeld-quandt'
  | 'brown-forsythe'
  | 'dumouchel-duncan'
  | 'dependence'
  | 'heterogeneity'
  | 'boundary-likelihood-ratio'
  | 'shapiro-wilk';

export type Reading = 'rejects' | 'does-not-contradict' | 'not-applicable';

export interface SmallestDeparture {
  measure: 'variance-ratio' | 'common-correlation' | 'tau2' | 'omega2';
  size: number;
  errors: { term: string; se: number }[];
}

/** detail: the test's own further figures, by name; texts and lists of columns included. */
export type Detail = Record<string, DetailValue>;
export type DetailValue = number | string | boolean | null | DetailValue[] | { [key: string]: DetailValue };

export interface Evidence {
  test: EvidenceTest;
  statistic: number | null;
  freedom1: number | null;
  freedom2: number | null;
  p: number | null;
  reading: Reading;
  smallestDeparture: SmallestDeparture | null;
  detail: Detail;
}

export interface BetweenRule {
  rule: MomentRule | 'full' | 'restricted';
  tau2: number | null;
  profileLow: number | null;
  profileHigh: number | null;
  qLow: number | null;
  qHigh: number | null;
  coefficients: Coefficient[];
}

export interface Estimated {
  estimate: number;
  low: number | null;
  high: number | null;
  se: number | null;
  reference: Reference | null;
}

export type Answer =
  | { statistic: number | null; scale: number | null; freedom1: number; freedom2: number | null; p: number | null }
  | (Estimated & { p: number | null })
  | { fitted: Estimated; newCellTrue: Estimated | null; newCellObserved: Estimated | null };

export interface QuestionResult {
  question: Question;
  answer: Answer;
  pHolm: number | null;
}

export interface Beam {
  term: string;
  /** C_jg: the coefficient is the sum of pull times observation. */
  pulls: number[];
  /** C_jg (y_g - c), c the GLS mean; null where there is no intercept, or the term is it. */
  contributions: number[] | null;
  /** The fewest cells that carry half of the total absolute pull; change: the fit without them, variance parameters held. */
  heaviest: { cells: string[]; change: Interval | null };
}

export interface ScanPoint {
  delta: number;
  coefficients: Coefficient[];
  logLikelihood: number;
  restrictedLogLikelihood: number;
}

export interface ExponentSupport {
  best: number;
  low: number;
  high: number;
  /** Where the supported range is cut at 0 or 1.5. */
  edge: null | 'low' | 'high' | 'both';
  ranges: { term: string; low: number; high: number; excludesZero: boolean }[];
}

/** The range of one coefficient over all admissible values; an end is null where an open value leads there. */
export interface Bound {
  term: string;
  low: number | null;
  high: number | null;
  /** False: exact. True: weights held at the chosen fit, or covariates moved by first-order steps. */
  weightsHeld: boolean;
  /** Everything fitted again at the two extremes; null where weights are not held. */
  refitted: { low: number | null; high: number | null } | null;
  survives: { sign: boolean; significance: boolean };
  /** cells: with uncertain values; brought: of them, left out of the fit; outside: limited, and wanting something else; all: every vertex was tried. */
  over: { cells: number; brought: number; outside: number; vertices: number; all: boolean };
}

export interface CommonCorrelation {
  rho: number;
  term: string;
  se: number;
}

/** What would give a coefficient a given error: cells in all, persons per cell as a multiple of the present ones; null where no number does. */
export interface Need {
  /** The error asked for, at the present freedom. */
  se: number | null;
  cells: number | null;
  persons: number | null;
}

export interface WhatItTakes {
  term: string;
  /** Share of sampling in the coefficient's error variance: all that more persons per cell can take away. */
  samplingShare: number | null;
  /** The error that stays however many persons a cell has. */
  floor: number | null;
  /** For an interval half as wide. */
  halfWidth: Need | null;
  /** For the smallest difference that matters to be found with power .8. */
  matters: (Need & { difference: number }) | null;
}

/** Likelihood ratio of parameters at their boundary against draws from the fit without them. */
export interface BootstrapBoundary {
  /** Names of the parameters that are zero under the null. */
  zero: string[];
  likelihood: 'full' | 'restricted';
  statistic: number;
  replications: number;
  seed: number;
  /** Draws whose statistic is no smaller. */
  count: number;
  p: number;
  /** The smallest p value that so many draws can give. */
  floor: number;
}

export type ChangeKind = 'rival' | 'cell' | 'block' | 'exponent' | 'bound' | 'robust';

/** One change that was tried. what: a rival's name, a cell's label, "column = value" of a block, an exponent, a correction. */
export interface Overturn {
  term: string;
  change: { kind: ChangeKind; what: string };
  estimate: number;
  low: number | null;
  high: number | null;
  /** "matters": the estimate or interval no longer clears the smallest difference that matters; "zero": the interval takes zero in, or the sign turns. */
  crosses: null | 'zero' | 'matters';
}

export interface SelfCheck {
  check: string;
  passed: boolean;
  figure: number | null;
}

export type CautionGroup = 'changes-answer' | 'limits-claim' | 'for-record';

/** code: a key of words/cautions; facts: what its sentence needs. */
export interface Caution {
  code: string;
  group: CautionGroup;
  facts: Detail;
}
