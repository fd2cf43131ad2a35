import type { NamedInput } from '@core/protocol/bridge';
import type { Variance } from '@core/protocol/plan';

/** States a structure that was changed: where it was, and the plan's files where one came with it. */
export type StateStructure = (
  next: Variance,
  how: { readonly at: string; readonly inputs?: readonly NamedInput[] },
) => void;
