// `npm run check`: every net, and its output where it caught something.
import { resolve } from 'node:path';
import { nets } from './nets.ts';

const root = resolve(import.meta.dirname, '../..');

/** Runs every net; prints a line each; returns how many passed and failed. */
export function checkAll(): { passed: number; failed: number } {
  const count = { passed: 0, failed: 0 };
  for (const [name, net] of Object.entries(nets)) {
    const { passed, output } = net(root);
    console.log(`${passed ? 'ok    ' : 'FAILED'} ${name}`);
    if (!passed) console.log(output);
    count[passed ? 'passed' : 'failed']++;
  }
  return count;
}

if (process.argv[1] === import.meta.filename) process.exitCode = checkAll().failed === 0 ? 0 : 1;
