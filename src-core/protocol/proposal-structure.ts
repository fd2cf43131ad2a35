import { withCorrelation, withoutTogether } from './edit-parts';
import { roleLacking, sameVariance } from './offered-parts';
import { isSampling } from './parameter-names';
import type { Correlation, Part, Plan, Rival, Roles, Variance } from './plan';

/** Where each number comes from. */
export type Origin = 'respondents' | 'own-error' | 'error-to-a-factor' | 'share' | 'count' | 'complete' | 'unknown';
/** Whether cells differ beyond the terms and beyond sampling. */
export type Beyond = 'yes' | 'no' | 'open';
/** Whether cells move together: not, in groups of a column, in an order inside groups. */
export type Together =
  | { readonly kind: 'no' | 'open' }
  | { readonly kind: 'group'; readonly by: readonly string[] }
  | { readonly kind: 'order'; readonly by: readonly string[]; readonly order: string };

/** The answers to the three questions from which a structure is proposed. */
export interface StructureAnswers {
  readonly origin: Origin;
  readonly beyond: Beyond;
  readonly together: Together;
}

/** Why a part stands in a proposal, or does not: a code; its sentence is made in words. */
export type ProposalReason =
  | 'mean-of-respondents'
  | 'error-given'
  | 'error-to-a-factor'
  | 'share-of-size'
  | 'share-not-stated'
  | 'count-over-exposure'
  | 'count-not-stated'
  | 'complete-constant'
  | 'unknown-with-size'
  | 'unknown-constant'
  | 'size-lacking'
  | 'error-lacking'
  | 'between-stated'
  | 'between-left-open'
  | 'between-denied'
  | 'between-in-constant'
  | 'between-with-exponent'
  | 'between-with-link'
  | 'independent'
  | 'together-left-open'
  | 'together-with-link'
  | 'group-shared'
  | 'group-in-sampling'
  | 'order-between'
  | 'order-in-sampling';

export interface StructureProposal {
  readonly variance: Variance;
  /** One a question, in the order of the questions. */
  readonly reasons: {
    readonly origin: readonly ProposalReason[];
    readonly beyond: readonly ProposalReason[];
    readonly together: readonly ProposalReason[];
  };
  /** Rivals worth fitting beside it, the proposal itself not among them. */
  readonly beside: readonly Rival[];
}

/**
 * A variance structure from the answers to three plain questions, with its reasons: to be accepted or changed, never taken unasked.
 *
 * roles: what the plan says each column is; a part whose role is missing is not proposed, and the reason says so. outcomeScale: rates on the log
 * scale are fitted by the likelihood of their counts, which has one part alone.
 *
 *     proposeStructure({ origin: 'respondents', beyond: 'open', together: { kind: 'no' } }, plan).variance.parts
 *     // per-size, between
 */
export function proposeStructure(
  answers: StructureAnswers,
  { roles, outcomeScale }: Pick<Plan, 'roles' | 'outcomeScale'>,
): StructureProposal {
  const sampling = samplingFor(answers.origin, roles);
  const alone = outcomeScale === 'log' && sampling.part.kind === 'counts';
  const between: BetweenChoice = alone
    ? { part: null, reason: 'between-with-link' }
    : betweenFor(answers.beyond, sampling.part);
  const bare = [sampling.part, ...(between.part === null ? [] : [between.part])];
  const whole: TogetherChoice =
    alone && ties(answers.together) ? { parts: bare, reason: 'together-with-link' } : together(answers.together, bare);
  const variance = structure(whole.parts);
  return {
    variance,
    reasons: { origin: [sampling.reason], beyond: [between.reason], together: [whole.reason] },
    beside: besideFor(variance, roles),
  };
}

function structure(parts: readonly Part[]): Variance {
  return { parts: [...parts], fixed: {} };
}

interface SamplingChoice {
  readonly part: Part;
  readonly reason: ProposalReason;
}

const constant: Part = { kind: 'constant', correlation: null };
const perSize: Part = { kind: 'per-size', correlation: null };
const bySizePower: Part = { kind: 'size-power', exponent: 'estimate', correlation: null };
const plainBetween: Part = { kind: 'between', correlation: null };

function samplingFor(origin: Origin, roles: Roles): SamplingChoice {
  const sized = roles.size !== null;
  switch (origin) {
    case 'respondents':
      return sized ? { part: perSize, reason: 'mean-of-respondents' } : { part: constant, reason: 'size-lacking' };
    case 'own-error':
    case 'error-to-a-factor': {
      if (roles.error === null) return { part: sized ? perSize : constant, reason: 'error-lacking' };
      const exact = origin === 'own-error';
      const part: Part = { kind: 'given', scale: exact ? 'fixed' : 'free', freedom: null, correlation: null };
      return { part, reason: exact ? 'error-given' : 'error-to-a-factor' };
    }
    case 'share':
    case 'count':
      return countedFor(origin, roles);
    case 'complete':
      return { part: constant, reason: 'complete-constant' };
    case 'unknown':
      return sized
        ? { part: bySizePower, reason: 'unknown-with-size' }
        : { part: constant, reason: 'unknown-constant' };
  }
}

/** Shares and rates have parts of their own; where a role of theirs is not stated, by size or by exposure. */
function countedFor(origin: 'share' | 'count', roles: Roles): SamplingChoice {
  const share = origin === 'share';
  const kind = share ? 'binomial' : 'counts';
  if (roleLacking(kind, roles) === null && !(share && roles.count !== null && roles.exposure !== null))
    return {
      part: { kind, scale: 'free', correlation: null },
      reason: share ? 'share-of-size' : 'count-over-exposure',
    };
  const reason: ProposalReason = share ? 'share-not-stated' : 'count-not-stated';
  if (roles.size !== null) return { part: perSize, reason };
  if (roles.exposure === null) return { part: constant, reason: share ? 'size-lacking' : reason };
  return { part: { kind: 'proxy', column: roles.exposure, exponent: -1, correlation: null }, reason };
}

interface BetweenChoice {
  readonly part: Part | null;
  readonly reason: ProposalReason;
}

function betweenFor(beyond: Beyond, sampling: Part): BetweenChoice {
  if (sampling.kind === 'constant') return { part: null, reason: 'between-in-constant' };
  if (beyond === 'no') return { part: null, reason: 'between-denied' };
  if (sampling.kind === 'size-power') return { part: null, reason: 'between-with-exponent' };
  return { part: plainBetween, reason: beyond === 'yes' ? 'between-stated' : 'between-left-open' };
}

interface TogetherChoice {
  readonly parts: readonly Part[];
  readonly reason: ProposalReason;
}

function ties({ kind }: Together): boolean {
  return kind === 'group' || kind === 'order';
}

/**
 * Cells that move together: in a group by a shock that they share; along an order by what sets cells apart.
 *
 * Where nothing sets them apart beyond sampling it is the sampling errors themselves that go together.
 */
function together(answer: Together, parts: readonly Part[]): TogetherChoice {
  const last = parts.at(-1) as Part;
  const correlated = (correlation: Correlation): readonly Part[] => [
    ...parts.slice(0, -1),
    withCorrelation(last, correlation),
  ];
  // The variance of these holds what lies between cells.
  const apart = last.kind === 'between' || last.kind === 'constant' || last.kind === 'size-power';
  switch (answer.kind) {
    case 'no':
      return { parts, reason: 'independent' };
    case 'open':
      return { parts, reason: 'together-left-open' };
    case 'group':
      return apart
        ? { parts: [...parts, { kind: 'shared', by: [...answer.by] }], reason: 'group-shared' }
        : { parts: correlated({ kind: 'exchangeable', by: [...answer.by] }), reason: 'group-in-sampling' };
    case 'order':
      return {
        parts: correlated({ kind: 'serial', by: [...answer.by], order: answer.order }),
        reason: apart ? 'order-between' : 'order-in-sampling',
      };
  }
}

/** What a reader would ask about: cells taken as independent, equal weights, weights by size, given errors, no between part, half-way between. */
function besideFor(variance: Variance, roles: Roles): Rival[] {
  const halfway: Variance = structure([{ kind: 'size-power', exponent: 0.5, correlation: null }]);
  const bare = variance.parts.filter(isSampling);
  const rivals: Rival[] = [
    withoutTogether(variance),
    'constant',
    ...(roles.size === null ? [] : (['per-size'] as const)),
    ...(roles.error === null ? [] : (['given'] as const)),
    ...(roles.error === null || bare.length === variance.parts.length ? [] : [structure(bare)]),
    ...(roles.size === null ? [] : [halfway]),
  ];
  return rivals.filter(
    (rival, i) => !sameVariance(rival, variance) && rivals.findIndex((other) => sameVariance(other, rival)) === i,
  );
}

/**
 * What the roles of a plan suggest as answers, before anybody was asked.
 *
 * An error column speaks for an error of its own; a count over an exposure for counts; a count over a size, or a share with a size, for shares;
 * a size for a mean of respondents.
 */
export function likelyAnswers(roles: Roles): StructureAnswers {
  return { origin: likelyOrigin(roles), beyond: 'open', together: { kind: 'open' } };
}

function likelyOrigin({ error, count, exposure, size, outcomeUnit }: Roles): Origin {
  if (error !== null) return 'own-error';
  if (count !== null && exposure !== null) return 'count';
  if (size !== null && (count !== null || outcomeUnit !== 'number')) return 'share';
  return size === null ? 'unknown' : 'respondents';
}

/** The answers that a stated structure amounts to, so that the questions open as the plan stands. */
export function answersOf({ variance, roles }: Pick<Plan, 'variance' | 'roles'>): StructureAnswers {
  const sampling = variance.parts.find(isSampling);
  const between = variance.parts.find((part) => part.kind === 'between');
  return {
    origin: sampling === undefined ? likelyOrigin(roles) : originOf(sampling, roles),
    beyond: between === undefined ? 'no' : 'yes',
    together: togetherOf(variance.parts),
  };
}

function originOf(sampling: Part, roles: Roles): Origin {
  switch (sampling.kind) {
    case 'per-size':
      return likelyOrigin({ ...roles, error: null }) === 'share' ? 'share' : 'respondents';
    case 'given':
      return sampling.scale === 'fixed' ? 'own-error' : 'error-to-a-factor';
    case 'matrix':
      return 'own-error';
    case 'binomial':
      return 'share';
    case 'counts':
      return 'count';
    case 'constant':
      return 'complete';
    default:
      return 'unknown';
  }
}

function togetherOf(parts: readonly Part[]): Together {
  for (const part of parts) {
    if (part.kind === 'shared') return { kind: 'group', by: part.by };
    if (!('correlation' in part) || part.correlation === null) continue;
    const { correlation } = part;
    return correlation.kind === 'serial'
      ? { kind: 'order', by: correlation.by, order: correlation.order }
      : { kind: 'group', by: correlation.by };
  }
  return { kind: 'no' };
}
