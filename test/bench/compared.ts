// `npm run bench -- --peers [WORD]`: this program beside general-purpose libraries, on the same data in the same run. WORD picks tasks.
import { rmSync } from 'node:fs';
import { join } from 'node:path';
import { leaveData, peersAreThere, type Told, tellOf } from './peers/prepare.ts';
import type { Task } from './tasks.ts';

export function compareAll(tasks: readonly Task[], scratch: string, picked: string): void {
  if (!peersAreThere()) {
    console.log('no peers: python3-numpy, python3-scipy, python3-statsmodels and r-base-core could not be installed');
    return;
  }
  for (const task of tasks.filter(({ title }) => title.includes(picked))) compare(task, scratch);
}

function compare(task: Task, scratch: string): void {
  const folder = join(scratch, 'peers');
  leaveData(folder, task.data());
  const peers = tellOf(task.task, folder, task.times, task.threads);
  rmSync(folder, { recursive: true, force: true });
  const ms: number[] = [];
  const busy: number[] = [];
  let values: Float64Array = new Float64Array(0);
  // The first runs are those of an engine that still compiles: the later half counts, as in a window that has been open for a moment.
  const from = performance.now();
  while (ms.length < 6 || (ms.length < 40 && performance.now() - from < 3000)) {
    const before = performance.now();
    const used = process.cpuUsage();
    values = task.ours();
    ms.push(performance.now() - before);
    const { user, system } = process.cpuUsage(used);
    busy.push((user + system) / 1e3);
  }
  const first = ms[0] as number;
  ms.splice(0, Math.floor(ms.length / 2));
  busy.splice(0, Math.floor(busy.length / 2));
  const own = middle(busy);
  console.log(`\n${task.title}`);
  console.log(`  ${'this program'.padEnd(34)}${timesOf(own, ms)}   the first time ${first.toFixed(0)}`);
  for (const told of peers) console.log(lineOf(told, own, values));
  const rivals = peers.filter(({ peer }) => task.goal.peers.includes(peer)).map((told) => middle(told.busy));
  if (rivals.length === 0) return;
  const share = own / Math.min(...rivals);
  const word = share <= task.goal.share ? 'reached' : 'missed';
  console.log(`  goal ${task.goal.share} of the best of its peers: ${share.toFixed(2)}, ${word}`);
}

function lineOf({ peer, ms, busy, values: theirs }: Told, own: number, values: Float64Array): string {
  const ratio = (own / middle(busy)).toFixed(2);
  return `  ${peer.padEnd(34)}${timesOf(middle(busy), ms)}   ratio ${ratio}   agreeing digits ${agreeing(values, theirs).toFixed(1)}`;
}

/** Processor time, and wall-clock time behind it. */
function timesOf(busy: number, ms: readonly number[]): string {
  return `${busy.toFixed(1).padStart(10)} ms (wall ${middle(ms).toFixed(1)})`;
}

/** Digits to which the two agree in the number where they agree least. */
function agreeing(ours: Float64Array, theirs: readonly number[]): number {
  let fewest = 17;
  for (const [i, value] of theirs.entries()) {
    const off = Math.abs(value / (ours[i] as number) - 1);
    if (off > 0) fewest = Math.min(fewest, -Math.log10(off));
  }
  return fewest;
}

function middle(times: readonly number[]): number {
  return times.toSorted((a, b) => a - b)[Math.floor(times.length / 2)] as number;
}
