// The general-purpose peers of `npm run bench -- --peers`: installed from Debian where they are missing, run on one thread on the same data.
import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

const PYTHON = '/usr/bin/python3';
const PACKAGES = [
  'python3-numpy',
  'python3-scipy',
  'python3-statsmodels',
  'libopenblas0-pthread',
  'r-base-core',
  'r-recommended',
];
const here = import.meta.dirname;

/** What one peer made of a task. */
export interface Told {
  readonly peer: string;
  readonly ms: readonly number[];
  /** Of the processor: what counts where other work shares the machine. */
  readonly busy: readonly number[];
  readonly values: readonly number[];
}

/** True where both peers can be run; they are installed first if the machine lets us. */
export function peersAreThere(): boolean {
  if (present()) return true;
  console.log(`installing ${PACKAGES.join(' ')} ...`);
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  spawnSync('apt-get', ['update', '-q'], { env, stdio: 'ignore' });
  spawnSync('apt-get', ['install', '-y', '-q', '--no-install-recommends', ...PACKAGES], { env, stdio: 'ignore' });
  return present();
}

function present(): boolean {
  const python = spawnSync(PYTHON, ['-c', 'import numpy, scipy, statsmodels.api']);
  return python.status === 0 && spawnSync('Rscript', ['--version']).status === 0;
}

/** Writes named columns of doubles where the peers look for them. */
export function leaveData(folder: string, columns: Readonly<Record<string, readonly Float64Array[]>>): void {
  if (!existsSync(folder)) mkdirSync(folder, { recursive: true });
  for (const [name, parts] of Object.entries(columns))
    writeFileSync(
      join(folder, name),
      Buffer.concat(parts.map((part) => Buffer.from(part.buffer, part.byteOffset, part.byteLength))),
    );
}

/** Runs every peer of a task on the data left in a folder. */
export function tellOf(task: string, folder: string, times: number, threads = 1): Told[] {
  const env = { ...process.env, OPENBLAS_NUM_THREADS: `${threads}`, OMP_NUM_THREADS: `${threads}` };
  const run = (program: string, script: string) => {
    const done = spawnSync(program, [join(here, script), task, folder, `${times}`], {
      env,
      encoding: 'utf8',
      maxBuffer: 1 << 26,
    });
    if (done.status !== 0) console.log(`  ${script} ${task}: ${done.stderr.trim().split('\n').at(-1)}`);
    return done.stdout
      .split('\n')
      .filter((line) => line.startsWith('{'))
      .map((line) => JSON.parse(line) as Told);
  };
  const ofPython = ['wls', 'matrix', 'hc3', 'cr1', 'cr2', 'wild'].includes(task);
  const ofR = ['wls', 'hc3', 'likelihood'].includes(task);
  return [...(ofPython ? run(PYTHON, 'peers.py') : []), ...(ofR ? run('Rscript', 'peers.R') : [])];
}
