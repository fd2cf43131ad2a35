import { seeded } from '../numbers/random';
import { POWER } from './reading';

/** Draws behind a simulated power. */
export const DRAWS = 2000;
const SEED = 1;
const WANTED = Math.ceil(POWER * DRAWS);

/** Up to this many cells powers are simulated; beyond it the large-sample form stands, which is close there. */
export const MOST_SIMULATED = 200;

/** 2,000 rows of standard normal numbers, always the same. */
export function normalRows(length: number): Float64Array[] {
  const { normal } = seeded(SEED);
  return Array.from({ length: DRAWS }, () => {
    const row = new Float64Array(length);
    for (let g = 0; g < length; g++) row[g] = normal();
    return row;
  });
}

/** True where at least .8 of the draws reject; stops as soon as that is settled. */
export function oftenEnough<T>(draws: readonly T[], rejects: (draw: T) => boolean): boolean {
  let rejected = 0;
  for (const [i, draw] of draws.entries()) {
    if (rejects(draw)) rejected++;
    if (rejected >= WANTED) return true;
    if (i + 1 - rejected > DRAWS - WANTED) return false;
  }
  return false;
}
