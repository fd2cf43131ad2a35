import { leastSquares, type Solved } from '../algebra/least-squares';
import { projectOnto, projectOut, spanOf } from '../algebra/orthonormal';
import { largestOf, powerOfTwoBelow } from '../algebra/powers-of-two';
import type { Fitted } from '../estimate/fitted';
import type { Design } from '../model/design';
import type { Plan } from '../protocol/plan';
import type { Cells } from '../table/cells';
import { normalRows } from './draws';

/** What every test of the structure reads: the cells in whitened coordinates, a free scale left out. */
export interface Frame {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly design: Design;
  /** G. */
  readonly count: number;
  /** G - k. */
  readonly freedom: number;
  /** Orthonormal basis of the whitened model columns, length G each. */
  readonly basis: readonly Float64Array[];
  /** What the model leaves of whitened errors, into `into`: by the basis or by what stands at right angles to it, whichever has fewer vectors. */
  readonly leftOver: (errors: Float64Array, into: Float64Array) => Float64Array;
  /** Whitened residuals of the fit weighted by the structure, whatever the target, in `unit`: their squares' squares neither run over nor under. */
  readonly residuals: Float64Array;
  /** A power of two near the largest whitened residual; 1 where all are 0. */
  readonly unit: number;
  /** True where the residuals are rounding and nothing else. */
  readonly perfect: boolean;
  /** Effective sizes m_g; null without the role. */
  readonly sizes: Float64Array | null;
  /** Cells by ascending size, ties in data order; null without sizes. */
  readonly bySize: readonly number[] | null;
  /** 2,000 rows of G standard normal numbers, made when first asked for and shared by all tests. */
  readonly draws: () => readonly Float64Array[];
}

/**
 * The frame of a fit. The residual tests judge the structure, so they read residuals weighted by it: those of the fit under target
 * "structure", those of the same model weighted by 1 / v under any other.
 *
 * shape v_g: squared units of the outcome; whitened residuals r_g / sqrt(v_g).
 */
export function frameOf(known: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly design: Design;
}): Frame {
  const { fitted, cells } = known;
  const count = fitted.shape.length;
  const { basis, whitened, perfect } = solvedUnder(fitted, fitted.shape);
  const unit = powerOfTwoBelow(largestOf(whitened));
  const sizes = cells.effectiveSize;
  let draws: readonly Float64Array[] | null = null;
  return {
    ...known,
    count,
    freedom: fitted.residualFreedom,
    basis,
    leftOver: leftOverOf(basis, count),
    residuals: whitened.map((r) => r / unit),
    unit,
    perfect,
    sizes,
    bySize: sizes && [...sizes.keys()].sort((a, b) => (sizes[a] as number) - (sizes[b] as number) || a - b),
    draws: () => (draws ??= normalRows(count)),
  };
}

function leftOverOf(basis: readonly Float64Array[], count: number): Frame['leftOver'] {
  if (2 * basis.length <= count) return (errors, into) => projectOut(basis, errors, into);
  const units = Array.from({ length: count }, (_, g) => new Float64Array(count).fill(1, g, g + 1));
  const others = spanOf(units, basis).slice(0, count - basis.length);
  return (errors, into) => projectOnto(others, errors, into);
}

/** The model of a fit under independent errors of other variances, up to a factor. */
export function solvedUnder({ design, response }: Fitted, variances: Float64Array): Solved {
  const solved = leastSquares({ columns: design.columns, y: response, variances });
  if ('dependent' in solved) throw new RangeError('columns depend on each other under the weights alone');
  return solved;
}

/** Part kinds of the structure, in the plan's order. */
export function kindsOf(plan: Plan): string[] {
  return plan.variance.parts.map((part) => part.kind);
}
