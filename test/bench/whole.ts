// The last lines of `npm run bench -- --peers`: a whole start, and the project file beside a plain one. Wall-clock medians.
import { spawnSync } from 'node:child_process';
import { closeSync, fsyncSync, mkdirSync, openSync, readFileSync, rmSync, writeFileSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import type { Project } from '../../src-main/project/project.ts';

function middleOf(times: number, work: () => void): number {
  const taken = Array.from({ length: times }, () => {
    const from = performance.now();
    work();
    return performance.now() - from;
  });
  return taken.sort((a, b) => a - b)[Math.floor(times / 2)] as number;
}

const line = (what: string, ms: number, beside = '') =>
  console.log(`  ${what.padEnd(46)}${ms.toFixed(0).padStart(8)} ms${beside}`);

/** Start, fit of 1,000 cells by least squares with all that a result holds, and its writing, beside a script of R and of statsmodels. */
export function compareStart(root: string, scratch: string, data: string): void {
  const folder = join(scratch, 'start');
  mkdirSync(folder, { recursive: true });
  writeFileSync(join(folder, 'cells.csv'), data);
  const plan = {
    format: 'steelyard-plan/1',
    data: { file: 'cells.csv' },
    roles: { label: ['label'], outcome: 'y', size: 'n' },
    terms: [{ column: 'x1' }, { column: 'x2' }, { column: 'x3' }],
    variance: { parts: [{ kind: 'per-size' }] },
  };
  writeFileSync(join(folder, 'plan.json'), JSON.stringify(plan));
  writeFileSync(
    join(folder, 'fit.R'),
    'd <- read.csv("cells.csv")\nprint(summary(lm(y ~ x1 + x2 + x3, d, weights = n)))\n',
  );
  writeFileSync(
    join(folder, 'fit.py'),
    'import pandas as pd, statsmodels.formula.api as s\nd = pd.read_csv("cells.csv")\nprint(s.wls("y ~ x1 + x2 + x3", d, weights=d.n).fit().summary())\n',
  );
  const run = (program: string, ...words: string[]) => {
    const { status, stderr } = spawnSync(program, words, { cwd: folder, encoding: 'utf8' });
    if (status !== 0) throw new Error(stderr);
  };
  console.log('\nstart, fit of 1,000 cells, print');
  const own = (...words: string[]) => run(process.execPath, join(root, 'out/main/command.js'), ...words);
  const whole = middleOf(5, () => own('run', 'plan.json', '--out', 'out', '--only', 'result'));
  const scriptOfR = middleOf(5, () => run('Rscript', 'fit.R'));
  const ratio = (ms: number) => `   ratio ${(whole / ms).toFixed(2)}`;
  line('this program, with evidence and checks', whole);
  line(
    'this program, its start alone (--version)',
    middleOf(5, () => own('--version')),
  );
  line('Rscript, summary(lm)', scriptOfR, ratio(scriptOfR));
  const ofPython = middleOf(3, () => run('/usr/bin/python3', 'fit.py'));
  line('statsmodels, summary of wls', ofPython, ratio(ofPython));
  rmSync(folder, { recursive: true });
}

/** One million rows of twelve doubles: kept in a project and read again, beside a plain file that is brought to the disk. */
export function compareProject(
  scratch: string,
  createProject: (name: string) => { readonly ok: boolean; readonly value?: Project },
): void {
  const bytes = new Uint8Array(96_000_000);
  for (let i = 0; i < bytes.length; i += 64) bytes[i] = (i * 31) & 255;
  const plain = join(scratch, 'plain');
  const written = middleOf(3, () => {
    const file = openSync(plain, 'w');
    writeSync(file, bytes);
    fsyncSync(file);
    closeSync(file);
  });
  const read = middleOf(3, () => void readFileSync(plain));
  const kept: number[] = [];
  const got: number[] = [];
  for (let i = 0; i < 3; i++) {
    const made = createProject(join(scratch, `bench-${i}.steelyard`));
    if (!made.ok || !made.value) throw new Error('no project');
    let sha256 = '';
    kept.push(
      middleOf(1, () => {
        const outcome = made.value?.keepInput(bytes);
        if (outcome?.ok) sha256 = outcome.value;
      }),
    );
    got.push(middleOf(1, () => void made.value?.inputBytes(sha256)));
    made.value.close();
  }
  const [write, back] = [kept, got].map((times) => times.toSorted((a, b) => a - b)[1] as number) as [number, number];
  console.log('\nproject file, 96 MB, hashed');
  line('write', write, `   ${(write / written).toFixed(2)} of a plain file (goal 3)`);
  line('read', back, `   ${(back / read).toFixed(2)} of a plain file (goal 1)`);
}
