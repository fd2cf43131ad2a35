import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { scratchFolder, steelyard } from '../command/steelyard.ts';

/** Hashes of what the demo's plan and data give: the same bytes on any machine. Derived by `npm run golden -- --accept`. */
export interface Golden {
  readonly [file: string]: string;
}

export const goldenFile = resolve('test/golden/demo.json');

/** Runs the built command on the demo and hashes its three files. */
export function derived(): Golden {
  const { folder, remove } = scratchFolder('golden');
  const { status, stderr } = steelyard(['run', resolve('resources/demo/plan.json'), '--out', folder]);
  if (status !== 0) throw new Error(stderr);
  const hash = (name: string) =>
    createHash('sha256')
      .update(readFileSync(join(folder, name)))
      .digest('hex');
  const golden = Object.fromEntries(['result.json', 'report.pdf', 'cells.csv'].map((name) => [name, hash(name)]));
  remove();
  return golden;
}

export function known(): Golden {
  return JSON.parse(readFileSync(goldenFile, 'utf8')) as Golden;
}
