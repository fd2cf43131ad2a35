/**
 * The plan in its normal form (steelyard-plan/1): every key written out, null where nothing was said.
 * Key order is the contract's: what is built in this order prints in this order.
 */
export interface Plan {
  format: 'steelyard-plan/1';
  title: string;
  about: About | null;
  data: DataPlan;
  roles: Roles;
  units: Record<string, string>;
  matters: Record<string, number>;
  outcomeScale: OutcomeScale;
  addedHalf: AddedHalf | null;
  terms: Term[];
  intercept: boolean;
  variance: Variance;
  estimate: Estimate;
  target: Target;
  inference: Inference;
  beside: Rival[];
  questions: Question[];
  tests: Tests | null;
  disclosure: Disclosure | null;
  report: ReportPlan;
}

export type OutcomeScale = 'identity' | 'log' | 'logit';
export type AddedHalf = 'no' | 'extreme-cells' | 'all-cells';

export interface About {
  question: string | null;
  source: string | null;
  extracted: string | null;
  analyst: string | null;
}

export interface DataPlan {
  file: string;
  read: Read;
  join: Join[];
  derive: Derive[];
  omit: Omit[];
  limits: Record<string, Limit>;
  sizeWithin: number | null;
}

export type Encoding = 'utf-8' | 'utf-16le' | 'utf-16be' | 'windows-1252';

/** How a file is read; null means found out from its bytes. `group` "none": no mark stands between thousands. */
export interface Read {
  encoding: Encoding | null;
  delimiter: string | null;
  decimal: '.' | ',' | null;
  group: string | null;
  statuses: Record<string, Status>;
  missing: Record<string, string[]>;
  footnotes: string[];
}

/** What a value is, besides its number. */
export type Status =
  | 'value'
  | 'true-zero'
  | 'rounds-to-zero'
  | 'suppressed-confidential'
  | 'suppressed-unreliable'
  | 'suppressed-unknown'
  | 'not-collected'
  | 'not-applicable'
  | 'interval'
  | 'provisional'
  | 'estimated'
  | 'low-reliability'
  | 'blank';

export interface Join {
  file: string;
  on: Record<string, string>;
  read: Read;
}

export type Derive =
  | { name: string; as: 'lag' | 'change'; of: string; by: string[]; order: string; steps: number }
  | { name: string; as: 'ratio'; of: string; over: string }
  | { name: string; as: 'difference'; of: string; minus: string }
  | { name: string; as: 'centred'; of: string }
  | { name: string; as: 'group-mean' | 'within-group-deviation'; of: string; by: string[] };

/** Both ends inclusive; a missing end is open. */
export interface Range {
  from: number | string | null;
  to: number | string | null;
}

export interface Omit {
  column: string;
  is: (string | number)[] | Range;
  because: string;
}

export type Limit = { rounding: number } | { suppressed: [number | null, number | null] };

export type ErrorKind = 'se' | 'variance' | 'half-width' | 'cv';
export type OutcomeUnit = 'number' | 'share' | 'percent';

export interface Roles {
  label: string[] | null;
  outcome: string | null;
  outcomeUnit: OutcomeUnit;
  size: string | null;
  error: string | null;
  errorKind: ErrorKind;
  errorLevel: number | null;
  count: string | null;
  exposure: string | null;
  per: number;
  designEffect: string | null;
  withinSd: string | null;
}

export type Transform = 'log' | 'sqrt' | 'inverse';

/** A term that stands alone or as a factor of a product. */
export type SimpleTerm =
  | { column: string }
  | { column: string; transform: Transform }
  | { column: string; power: number }
  | { column: string; as: 'category'; baseline: string | null };

export type Term = SimpleTerm | { product: SimpleTerm[] };

export type Correlation = { kind: 'exchangeable'; by: string[] } | { kind: 'serial'; by: string[]; order: string };

export type Scale = 'fixed' | 'free';
export type Freedom = number | { column: string } | null;

export type Part =
  | { kind: 'constant'; correlation: Correlation | null }
  | { kind: 'per-size'; correlation: Correlation | null }
  | { kind: 'given'; scale: Scale; freedom: Freedom; correlation: Correlation | null }
  | { kind: 'matrix'; file: string; scale: Scale; freedom: Freedom }
  | { kind: 'size-power'; exponent: number | 'estimate'; correlation: Correlation | null }
  | { kind: 'proxy'; column: string; exponent: number | 'estimate'; correlation: Correlation | null }
  | { kind: 'log-linear'; terms: SimpleTerm[]; correlation: Correlation | null }
  | { kind: 'per-class'; column: string; perSize: boolean; correlation: Correlation | null }
  | { kind: 'binomial'; scale: Scale; correlation: Correlation | null }
  | { kind: 'counts'; scale: Scale; correlation: Correlation | null }
  | { kind: 'between'; correlation: Correlation | null }
  | { kind: 'shared'; by: string[] };

export type PartKind = Part['kind'];

/** Omega as a sum of parts. `fixed`: variance parameters that the user sets, under their result names. */
export interface Variance {
  parts: Part[];
  fixed: Record<string, number>;
}

export type MomentRule = 'dersimonian-laird' | 'paule-mandel' | 'hanushek';
export type Estimate =
  | { method: 'least-squares' | 'two-step' | 'full' | 'restricted' }
  | { method: 'moments'; rule: MomentRule };

export type Target = 'structure' | 'persons' | 'cells' | 'diagonal' | Variance;
export type Rival = 'constant' | 'per-size' | 'given' | Variance;

export type RobustCorrection = 'HC0' | 'HC1' | 'HC2' | 'HC3' | 'HC4';
export type ClusterCorrection = 'CR0' | 'CR1' | 'CR2' | 'CR3';

export type Inference =
  | { kind: 'model'; level: number }
  | { kind: 'knapp-hartung'; level: number; floor: boolean }
  | { kind: 'kenward-roger'; level: number }
  | { kind: 'robust'; level: number; correction: RobustCorrection }
  | { kind: 'clustered'; level: number; correction: ClusterCorrection; by: string[]; alsoBy: string[] | null }
  | { kind: 'wild'; level: number; by: string[]; replications: number; seed: number };

/** A cell's covariates: data columns to values. */
export type Where = Record<string, number | string>;

export interface Share {
  where: Where;
  share: number;
}

interface Asked {
  name: string | null;
  family: string | null;
}

export type Question =
  | ({ kind: 'joint'; terms: string[] } & Asked)
  | ({ kind: 'combination'; of: Record<string, number>; equals: number } & Asked)
  | ({ kind: 'expect'; where: Where; size: number | null; error: number | null } & Asked)
  | ({ kind: 'average'; of: Share[]; minus: Share[] | null } & Asked);

export interface Tests {
  columns: string[] | null;
  whiteColumns: string[] | null;
  neighbours: string | null;
}

export interface Disclosure {
  profile: string;
  version: string;
}

export interface ReportPlan {
  paper: 'A4' | 'Letter';
  omit: string[];
}
