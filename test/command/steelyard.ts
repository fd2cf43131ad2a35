import { type SpawnSyncReturns, spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';

const command = resolve('out/main/command.js');

/** Runs the built command line, from a folder. */
export function steelyard(words: readonly string[], folder = '.'): SpawnSyncReturns<string> {
  return spawnSync(process.execPath, [command, ...words], {
    cwd: folder,
    encoding: 'utf8',
    env: { ...process.env, npm_lifecycle_event: '', NO_COLOR: '1' },
    maxBuffer: 1 << 28,
  });
}

/** The messages of `--json`, one a line. */
export function messagesOf(
  stderr: string,
): { level: string; code: string; at: string | null; facts: object; text: string }[] {
  return stderr
    .split('\n')
    .filter((line) => line !== '')
    .map((line) => JSON.parse(line));
}

/** A folder of its own for one test file, and how to be rid of it. */
export function scratchFolder(name: string): { folder: string; remove: () => void } {
  const folder = mkdtempSync(join(tmpdir(), `steelyard-${name}-`));
  return { folder, remove: () => rmSync(folder, { recursive: true, force: true }) };
}

export { command };
