import { existsSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';
import { done, type Outcome } from '@core/protocol/outcome';
import type Database from 'better-sqlite3';
import { lastOf, layoutOf, type Step, take } from './layout';
import { copyInto } from './save-as';

/**
 * Brings a file of an older layout to the newest, step by step, after a copy of it was put beside it (NAME.layout-10.steelyard).
 *
 * A crash leaves the file at the last whole step. Refusals: what the machine refuses; then the file is untouched.
 */
export function upgrade({
  db,
  file,
  steps,
}: {
  readonly db: Database.Database;
  readonly file: string;
  readonly steps: readonly Step[];
}): Outcome<null> {
  const before = layoutOf(db);
  if (before >= lastOf(steps)) return done(null);
  const copied = copyInto(db, copyName(file, before));
  if (!copied.ok) return copied;
  for (const step of steps) take(db, step);
  return done(null);
}

function copyName(file: string, layout: number): string {
  const name = basename(file, '.steelyard');
  for (let attempt = 1; ; attempt++) {
    const again = attempt === 1 ? '' : `-${attempt}`;
    const copy = join(dirname(file), `${name}.layout-${layout}${again}.steelyard`);
    if (!existsSync(copy)) return copy;
  }
}
