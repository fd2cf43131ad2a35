import type { PlacedPart } from './structure';
import type { Chain } from './structure-rho';

/** What one part ties together inside one block: its groups, as places in the block. */
export interface Tied {
  readonly placed: PlacedPart;
  readonly chains: readonly Chain[];
}

/** A block with all that ties its cells. */
export interface Block {
  readonly cells: Int32Array;
  readonly tied: readonly Tied[];
}

/** Variances of every part with their roots, and their slopes, at one theta; each of length G. */
export interface Known {
  readonly theta: Float64Array;
  readonly variances: readonly Float64Array[];
  readonly roots: readonly Float64Array[];
  readonly slopes: () => readonly (readonly Slope[])[];
}

/** dv_g by one parameter; roots: NaN where a cell's variance falls as it grows. */
export interface Slope {
  readonly values: Float64Array;
  readonly roots: Float64Array;
}
