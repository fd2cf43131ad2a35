// `npm run bench`: figures to standard output; they never fail. Core is bundled as the program bundles it, then measured.
import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { build } from 'vite';
import { compareAll } from './compared.ts';
import { compareProject, compareStart } from './whole.ts';
import { measureWindow } from './window.ts';

const root = resolve(import.meta.dirname, '../..');
const scratch = mkdtempSync(join(tmpdir(), 'steelyard-bench-'));
const bundle = join(root, 'node_modules/.cache/bench');

/** Median and range of wall-clock milliseconds. */
function timed(times: number, work: () => void): string {
  return figureOf(
    Array.from({ length: times }, () => {
      const from = performance.now();
      work();
      return performance.now() - from;
    }),
  );
}

function figureOf(milliseconds: readonly number[]): string {
  const taken = milliseconds.toSorted((a, b) => a - b);
  const middle = taken[Math.floor(taken.length / 2)] as number;
  return `${middle.toFixed(1).padStart(10)} ms   (${(taken[0] as number).toFixed(1)} to ${(taken.at(-1) as number).toFixed(1)}, ${taken.length} runs)`;
}

const say = (what: string, figure: string) => console.log(`${what.padEnd(62)}${figure}`);
const command = (...words: string[]) => {
  const { status, stderr } = spawnSync(process.execPath, [join(root, 'out/main/command.js'), ...words], {
    encoding: 'utf8',
  });
  if (status !== 0) throw new Error(stderr);
};

await build({
  configFile: false,
  logLevel: 'warn',
  resolve: { alias: { '@core': join(root, 'src-core'), '@main': join(root, 'src-main') } },
  build: {
    ssr: true,
    outDir: bundle,
    rolldownOptions: {
      input: { measured: join(root, 'test/bench/measured.ts'), tasks: join(root, 'test/bench/tasks.ts') },
      external: ['better-sqlite3', 'pdfkit'],
    },
  },
});
const measured = (await import(pathToFileURL(join(bundle, 'measured.js')).href)) as typeof import('./measured.ts');

const [peers, picked = ''] = process.argv.slice(2);
if (peers === '--peers') {
  const { load, tasks } = (await import(pathToFileURL(join(bundle, 'tasks.js')).href)) as typeof import('./tasks.ts');
  const kernels = join(root, 'out/kernels/kernels.wasm');
  console.log(existsSync(kernels) && load(readFileSync(kernels)) ? 'compiled kernels' : 'kernels in TypeScript');
  compareAll(tasks, scratch, picked);
  if ('start'.includes(picked)) compareStart(root, scratch, measured.tableText(1000));
  if ('project'.includes(picked)) compareProject(scratch, measured.createProject);
  rmSync(scratch, { recursive: true, force: true });
  process.exit();
}
for (const cells of [1_000, 100_000, 1_000_000]) {
  const fit = measured.prepareFit(cells, 10);
  say(`one fit, per size, ${cells} cells x 10 columns`, timed(cells > 500_000 ? 3 : 7, fit));
}
for (const cells of [1_000, 100_000]) {
  const fit = measured.prepareLikelihoodFit(cells, 10);
  say(`restricted likelihood, between + per size, ${cells} cells x 10`, timed(cells > 50_000 ? 3 : 7, fit));
}
const table = new TextEncoder().encode(measured.tableText(100_000));
say(
  'import of 100,000 rows x 10 columns',
  timed(3, () => measured.importTable(table)),
);

for (const cells of [60, 1_000, 5_000]) {
  const folder = join(scratch, `${cells}`);
  const { plan, data } = measured.jobText(cells);
  spawnSync('mkdir', [folder]);
  writeFileSync(join(folder, 'plan.json'), plan);
  writeFileSync(join(folder, 'cells.csv'), data);
  const run = (...more: string[]) => command('run', join(folder, 'plan.json'), '--out', join(folder, 'out'), ...more);
  say(
    `command line, whole job with report, ${cells} cells`,
    timed(3, () => run()),
  );
  say(
    `command line, result alone, ${cells} cells`,
    timed(3, () => run('--only', 'result')),
  );
}
say(
  'start of the command line (--version)',
  timed(7, () => command('--version')),
);
await measureWindow((what, taken) => say(what, figureOf(taken)), measured.tableText);
rmSync(scratch, { recursive: true, force: true });
