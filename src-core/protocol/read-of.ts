import { faultsIn } from './faults';
import { filledBy } from './filled';
import { done, type Outcome, refuseAll } from './outcome';
import type { Read } from './plan';
import { readSchema } from './read-schema';

/** How a file is to be read, its defaults filled in. at: pointer under which its faults are told. */
export function normalRead(value: unknown, at = ''): Outcome<Read> {
  const faults = faultsIn(readSchema, value, at);
  return faults.length > 0 ? refuseAll(faults) : done(filledBy(readSchema, value ?? {}) as Read);
}
