import { lackingIn, roleLacking, sameVariance } from './offered-parts';
import { isSampling } from './parameter-names';
import type { Part, Plan, Rival, Roles, Variance } from './plan';

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
  | 'share-wished'
  | 'share-by-size'
  | 'count-wished'
  | 'count-by-size'
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
  | 'independent'
  | 'together-left-open'
  | 'group-wished'
  | 'order-wished';

export interface StructureProposal {
  /** What this version can fit. */
  readonly variance: Variance;
  /** What the answers ask for, where this version lacks a piece of it; null where the proposal is that already. */
  readonly wished: Variance | null;
  /** Pieces that the wish holds and this version does not fit. */
  readonly lacking: readonly string[];
  /** One or two a question, in the order of the questions. */
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
 * roles: what the plan says each column is; a part whose role is missing is not proposed, and the reason says so.
 *
 *     proposeStructure({ origin: 'respondents', beyond: 'open', together: { kind: 'no' } }, roles).variance.parts
 *     // per-size, between
 */
export function proposeStructure(answers: StructureAnswers, roles: Roles): StructureProposal {
  const sampling = samplingFor(answers.origin, roles);
  const between = betweenFor(answers.beyond, sampling.part);
  const extra = togetherFor(answers.together, between.part !== null);
  const variance = structure([sampling.part, ...listed(between.part)]);
  const wish = structure([sampling.wished, ...listed(extra.between ?? between.part), ...listed(extra.shared)]);
  const lacking = lackingIn(wish);
  return {
    variance,
    wished: lacking.length > 0 ? wish : null,
    lacking,
    reasons: { origin: sampling.reasons, beyond: [between.reason], together: [extra.reason] },
    beside: besideFor(variance, roles),
  };
}

function structure(parts: readonly Part[]): Variance {
  return { parts: [...parts], fixed: {} };
}

function listed(part: Part | null): Part[] {
  return part === null ? [] : [part];
}

interface SamplingChoice {
  readonly part: Part;
  readonly wished: Part;
  readonly reasons: readonly ProposalReason[];
}

const constant: Part = { kind: 'constant', correlation: null };
const perSize: Part = { kind: 'per-size', correlation: null };
const bySizePower: Part = { kind: 'size-power', exponent: 'estimate', correlation: null };
const plainBetween: Part = { kind: 'between', correlation: null };

function samplingFor(origin: Origin, roles: Roles): SamplingChoice {
  const stands = (part: Part, ...reasons: ProposalReason[]): SamplingChoice => ({ part, wished: part, reasons });
  const sized = roles.size !== null;
  switch (origin) {
    case 'respondents':
      return sized ? stands(perSize, 'mean-of-respondents') : stands(constant, 'size-lacking');
    case 'own-error':
    case 'error-to-a-factor': {
      if (roles.error === null) return sized ? stands(perSize, 'error-lacking') : stands(constant, 'error-lacking');
      const exact = origin === 'own-error';
      const part: Part = { kind: 'given', scale: exact ? 'fixed' : 'free', freedom: null, correlation: null };
      return stands(part, exact ? 'error-given' : 'error-to-a-factor');
    }
    case 'share':
    case 'count':
      return countedFor(origin, roles);
    case 'complete':
      return stands(constant, 'complete-constant');
    case 'unknown':
      return sized ? stands(bySizePower, 'unknown-with-size') : stands(constant, 'unknown-constant');
  }
}

/** Shares and rates: their own parts are wished for; until they can be fitted, by size or by exposure. */
function countedFor(origin: 'share' | 'count', roles: Roles): SamplingChoice {
  const share = origin === 'share';
  const wished: Part = { kind: share ? 'binomial' : 'counts', scale: 'free', correlation: null };
  const wish: ProposalReason = share ? 'share-wished' : 'count-wished';
  if (lackingIn({ parts: [wished] }).length === 0 && roleLacking(wished.kind, roles) === null)
    return { part: wished, wished, reasons: [wish] };
  if (roles.size !== null) return { part: perSize, wished, reasons: [wish, share ? 'share-by-size' : 'count-by-size'] };
  if (roles.exposure === null) return { part: constant, wished, reasons: [wish, 'size-lacking'] };
  const part: Part = { kind: 'proxy', column: roles.exposure, exponent: -1, correlation: null };
  return { part, wished, reasons: [wish, 'count-by-size'] };
}

function betweenFor(beyond: Beyond, sampling: Part): { readonly part: Part | null; readonly reason: ProposalReason } {
  if (sampling.kind === 'constant') return { part: null, reason: 'between-in-constant' };
  if (beyond === 'no') return { part: null, reason: 'between-denied' };
  if (sampling.kind === 'size-power') return { part: null, reason: 'between-with-exponent' };
  return { part: plainBetween, reason: beyond === 'yes' ? 'between-stated' : 'between-left-open' };
}

interface Extra {
  readonly shared: Part | null;
  /** Takes the place of the plain between part. */
  readonly between: Part | null;
  readonly reason: ProposalReason;
}

function togetherFor(together: Together, hasBetween: boolean): Extra {
  switch (together.kind) {
    case 'no':
      return { shared: null, between: null, reason: 'independent' };
    case 'open':
      return { shared: null, between: null, reason: 'together-left-open' };
    case 'group':
      return { shared: { kind: 'shared', by: [...together.by] }, between: null, reason: 'group-wished' };
    case 'order': {
      const correlation = { kind: 'serial' as const, by: [...together.by], order: together.order };
      return { shared: null, between: hasBetween ? { kind: 'between', correlation } : null, reason: 'order-wished' };
    }
  }
}

/** What a reader would ask about: equal weights, weights by size, the given errors, the proposal without its between part, half-way between. */
function besideFor(variance: Variance, roles: Roles): Rival[] {
  const halfway: Variance = structure([{ kind: 'size-power', exponent: 0.5, correlation: null }]);
  const bare = variance.parts.filter(isSampling);
  const rivals: Rival[] = [
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
