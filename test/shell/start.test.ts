import { spawnSync } from 'node:child_process';
import { chmodSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { describe, expect, it, onTestFinished } from 'vitest';

const start = resolve(import.meta.dirname, '../standin/start.ts');

function folder(): string {
  const path = mkdtempSync(join(tmpdir(), 'steelyard-start-'));
  onTestFinished(() => rmSync(path, { recursive: true, force: true }));
  return path;
}

/** `npm start` on a machine whose path holds what the test lays there, and no Electron. */
function startWith(path: string) {
  const { STEELYARD_CHROMIUM: _, ...env } = process.env;
  return spawnSync(process.execPath, [start], {
    encoding: 'utf8',
    env: { ...env, PATH: path, STEELYARD_STANDIN: '1', STEELYARD_PROFILE: join(path, 'profile') },
  });
}

describe.runIf(process.platform === 'linux')('npm start', () => {
  it('says which command does the job where there is nothing to open a window in', () => {
    const { status, stdout } = startWith(folder());
    expect(stdout).toBe(
      'There is neither an Electron binary nor a Chrome, Chromium or Edge here to open a window in. Without a window, this does the job: npm run --silent steelyard -- run PLAN.json --out FOLDER\n',
    );
    expect(status).toBe(1);
  });

  it('says so, and the same, where a browser is installed that cannot open one', () => {
    const path = folder();
    const browser = join(path, 'chromium');
    writeFileSync(browser, '#!/bin/sh\nexit 1\n');
    chmodSync(browser, 0o755);
    const { status, stdout, stderr } = startWith(path);
    expect(stdout).toContain(`the same built program opens in ${browser} through the stand-in of test/standin`);
    expect(stderr).toContain(`No window could be opened in ${browser}`);
    expect(stderr).toContain('npm run --silent steelyard -- run PLAN.json --out FOLDER');
    expect(status).toBe(1);
  });
});
