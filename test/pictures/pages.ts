// `npm run pictures`: the pages of the demo's report and every screen as pictures for the README. Needs pdftoppm (Debian: poppler-utils).
import { spawnSync } from 'node:child_process';
import { mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { withPalette } from './palette.ts';
import { takeScreens } from './screens.ts';

const root = resolve(import.meta.dirname, '../..');
const out = join(root, 'resources/demo/out');
const pictures = join(root, 'resources/pictures');

function run(program: string, args: readonly string[]): void {
  const { status, error } = spawnSync(program, args, { stdio: 'inherit', cwd: root });
  if (error || status !== 0) throw new Error(`${program} did not do its part: ${error?.message ?? `status ${status}`}`);
}

run(process.execPath, ['out/main/command.js', 'run', 'resources/demo/plan.json', '--out', out]);
rmSync(pictures, { recursive: true, force: true });
mkdirSync(pictures, { recursive: true });
run('pdftoppm', ['-r', '72', '-png', join(out, 'report.pdf'), join(pictures, 'report')]);
await takeScreens();
for (const name of readdirSync(pictures)) {
  const file = join(pictures, name);
  writeFileSync(file, withPalette(readFileSync(file)));
}
console.log(`${readdirSync(pictures).length} pictures in resources/pictures`);
