import type { Bound } from '../protocol/result';
import { type Asked, type BoundChange, boundsOf } from './bounds';
import { sizeBoundsOf } from './size-bounds';

/** What the values known to within limits do to the coefficients. */
export interface Limits {
  readonly bounds: Bound[];
  /** Coefficients at their extremes, for the changes that were tried. */
  readonly changes: readonly BoundChange[];
  readonly facts: LimitFacts;
}

/** What cautions need of it. */
export interface LimitFacts {
  /** Columns of the sizes and coefficients at their extremes. */
  readonly sizes: readonly BoundChange[];
  /** True where the cells behind the bounds could not carry the model. */
  readonly failed: boolean;
}

/**
 * Bounds over suppressed, interval and rounded values, and what sizes that are known to within so many do.
 *
 * cells: as the data stage left them, before any outcome scale; model: of the chosen fit. Bounds that the model stage refuses on their cells are none,
 * and said to be.
 */
export function limitsOf(of: Asked): Limits {
  const { fitted, cells, plan, model, coefficients, hooks } = of;
  const found = boundsOf(of);
  const alone = coefficients.length === 1;
  const asked = (j: number): boolean => alone || fitted.design.termOf[j] !== -1;
  const sizes = sizeBoundsOf({ fitted, cells, plan, model, asked, hooks });
  const bounds = found.ok ? found.value.bounds : [];
  const changes = [...(found.ok ? found.value.changes : []), ...sizes];
  return { bounds, changes, facts: { sizes, failed: !found.ok } };
}
