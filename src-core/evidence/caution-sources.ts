import type { Fitted } from '../estimate/fitted';
import type { CautionCode, CautionFacts, Shift } from '../protocol/cautions';
import type { Plan } from '../protocol/plan';
import type { Result } from '../protocol/result';
import type { Cells } from '../table/cells';
import type { LimitFacts } from './limits';

/** The parts of the result that cautions are drawn from. */
export type CautionPieces = Pick<
  Result,
  | 'data'
  | 'fit'
  | 'robustBeside'
  | 'cells'
  | 'effectiveCells'
  | 'beside'
  | 'evidence'
  | 'betweenRules'
  | 'beam'
  | 'overturn'
  | 'selfChecks'
> &
  Partial<Pick<Result, 'bounds'>>;

export interface CautionSources {
  readonly plan: Plan;
  readonly cells: Cells;
  readonly fitted: Fitted;
  readonly pieces: CautionPieces;
  /** Two variance parameters that the cells hardly tell apart, where the model stage found such a pair. */
  /** What values known to within limits did, where any are. */
  readonly limits?: LimitFacts;
  readonly hardlySeparate?: CautionFacts['parameters-hardly-separate'] | null;
}

/** One caution before it is placed. */
export type Found = { readonly [C in CautionCode]: { readonly code: C; readonly facts: CautionFacts[C] } }[CautionCode];

/** The largest of several moves of coefficients, in errors of the chosen fit; the intercept only where it stands alone. Null without one. */
export function largestShift(
  fit: CautionPieces['fit'],
  moves: readonly { readonly term: string; readonly to: number }[],
): Shift | null {
  const alone = fit.coefficients.length === 1;
  let largest: Shift | null = null;
  for (const { term, to } of moves) {
    const own = fit.coefficients.find((one) => one.term === term);
    if (!own || (term === 'intercept' && !alone) || to === own.estimate) continue;
    const inErrors = own.se === null || own.se === 0 ? null : Math.abs(to - own.estimate) / own.se;
    if (largest === null || (inErrors ?? 0) > (largest.inErrors ?? 0))
      largest = { term, from: own.estimate, to, inErrors };
  }
  return largest;
}
