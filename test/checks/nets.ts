// The nets that hold the layers: types per environment, layers, lint. Used by `npm run check` and by the proof that each rule fires.
import { spawnSync } from 'node:child_process';
import { join } from 'node:path';

export interface Caught {
  readonly passed: boolean;
  readonly output: string;
}

/** Runs a tool of this project in a folder, with nothing of the caller's colours. */
export function runTool(folder: string, tool: string, args: readonly string[]): Caught {
  const done = spawnSync(process.execPath, [join(folder, 'node_modules', tool), ...args], {
    cwd: folder,
    encoding: 'utf8',
    maxBuffer: 1 << 28,
    env: { ...process.env, NO_COLOR: '1', FORCE_COLOR: '0' },
  });
  return { passed: done.status === 0, output: `${done.stdout}${done.stderr}` };
}

const types = (project: string) => (folder: string) =>
  runTool(folder, 'typescript/bin/tsc', ['-b', project, '--pretty', 'false']);

/** Every check by name, in the order in which they are worth reading. */
export const nets: Readonly<Record<string, (folder: string) => Caught>> = {
  'types of src-core': types('src-core'),
  'types of src-main': types('src-main'),
  'types of test': types('test'),
  'types of src-renderer': (folder) =>
    runTool(folder, 'svelte-check/bin/svelte-check', [
      '--tsconfig',
      'src-renderer/tsconfig.json',
      '--fail-on-warnings',
    ]),
  lint: (folder) => runTool(folder, '@biomejs/biome/bin/biome', ['ci', '--colors=off', '--max-diagnostics=500', '.']),
  layers: (folder) =>
    runTool(folder, 'dependency-cruiser/bin/dependency-cruiser.mjs', [
      '--output-type',
      'err',
      'src-core',
      'src-main',
      'src-renderer',
    ]),
  'nothing unreached': (folder) => runTool(folder, 'knip/bin/knip.js', ['--no-progress']),
};
