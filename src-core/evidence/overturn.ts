import type { Fitted } from '../estimate/fitted';
import { coefficientsByBlocks, tiesCells } from '../inference/robust-beside';
import type { Plan, Rival } from '../protocol/plan';
import type { Coefficient, Overturn } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import type { BoundChange } from './bounds';
import { crossing, shiftIn } from './crossing';
import { type Deletion, deletions } from './deletions';
import { judgeOf } from './judge';

export interface OverturnSources {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly coefficients: readonly Coefficient[];
  readonly rivals: readonly { readonly rival: Rival; readonly coefficients: readonly Coefficient[] }[];
  readonly hooks?: Hooks;
  /** Coefficients at the ends of their bounds, and under sizes moved as far as they may be. */
  readonly limits?: readonly BoundChange[];
  /** Coefficients at the ends of the supported exponents (`exponentScanOf`). */
  readonly ends: readonly { readonly delta: number; readonly coefficients: readonly Coefficient[] }[];
}

/**
 * The changes that were tried on each coefficient, the largest shift first, in standard errors of the chosen fit.
 *
 * Tried: every rival; every cell left out; every group of a label column left out ("column = value"); both ends of the supported exponents; both ends of
 * the bounds over values and sizes that are known to within limits (named by their columns); robust
 * errors (HC3, by blocks CR2 where cells go together), or model-based ones where the plan's are robust. Deletions hold the variance parameters, are ranked by their exact shifts, and the
 * largest of each term are refitted for their intervals under the plan's inference; those that leave the terms without enough cells are no
 * change of this kind. The intercept is left out unless it stands alone.
 *
 * Source: METHODS of the program, 5 and 11.
 */
export function overturnOf(sources: OverturnSources): Overturn[] {
  const { coefficients, rivals, ends, plan } = sources;
  const alone = coefficients.length === 1;
  const asked = (j: number): boolean => alone || sources.fitted.design.termOf[j] !== -1;
  const tried: Tried[] = [
    ...rivals.map((one) => ({ kind: 'rival' as const, what: rivalName(one.rival), coefficients: one.coefficients })),
    ...ends.map((one) => ({ kind: 'exponent' as const, what: `${one.delta}`, coefficients: one.coefficients })),
    ...otherErrors(sources),
  ];
  const changes = tried.flatMap(({ kind, what, coefficients: after }) =>
    after.flatMap((one, j) => (asked(j) ? [{ j, kind, what, one }] : [])),
  );
  const limits = (sources.limits ?? []).flatMap(({ j, what, one }) =>
    asked(j) ? [{ j, kind: 'bound' as const, what, one }] : [],
  );
  const all: Change[] = [...changes, ...limits, ...deletions({ ...sources, asked })];
  return all
    .map((change, place) => ({
      change,
      place,
      size: shiftIn(coefficients[change.j] as Coefficient, change.one.estimate),
    }))
    .sort((a, b) => b.size - a.size || a.place - b.place)
    .map(({ change: { j, kind, what, one } }) => ({
      term: one.term,
      change: { kind, what },
      estimate: one.estimate,
      low: one.low,
      high: one.high,
      crosses: crossing(coefficients[j] as Coefficient, one, plan.matters[one.term] ?? null),
    }));
}

interface Tried {
  readonly kind: Overturn['change']['kind'];
  readonly what: string;
  readonly coefficients: readonly Coefficient[];
}

type Change = Omit<Deletion, 'kind'> & Pick<Tried, 'kind'>;

/** A rival's word, or the kinds of its parts with the exponents and parameters that the plan sets. */
export function rivalName(rival: Rival): string {
  if (typeof rival === 'string') return rival;
  const parts = rival.parts.map((part) =>
    'exponent' in part && typeof part.exponent === 'number' ? `${part.kind} ${part.exponent}` : part.kind,
  );
  const fixed = Object.entries(rival.fixed).map(([name, value]) => `${name} = ${value}`);
  return [parts.join(' + '), ...fixed].join(', ');
}

/** The same estimates under the other kind of error: by blocks where cells go together, since errors by cells would depend on the root chosen. */
function otherErrors({ fitted, cells, plan }: OverturnSources): Tried[] {
  const { level } = plan.inference;
  const robust = plan.inference.kind === 'robust';
  if (tiesCells(fitted)) {
    const byBlocks = coefficientsByBlocks(fitted, level);
    return byBlocks ? [{ kind: 'robust', what: 'CR2', coefficients: byBlocks }] : [];
  }
  const inference: Plan['inference'] = robust ? { kind: 'model', level } : { kind: 'robust', level, correction: 'HC3' };
  const coefficients = judgeOf(cells, { ...plan, inference })(fitted, null);
  return coefficients?.some(({ se }) => se !== null)
    ? [{ kind: 'robust', what: robust ? 'model' : 'HC3', coefficients }]
    : [];
}
