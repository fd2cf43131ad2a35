import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { copyFileSync, existsSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { checkProject } from '@main/project/check-project';
import { openProject } from '@main/project/project';
import Database from 'better-sqlite3';
import { describe, expect, it } from 'vitest';
import { codeOf, folder, newProject, planCalled, taken, titleOf } from './support';

/** Lets a process of its own change the project until it is killed; answers the last change that it was told was accepted. */
async function killedAfter(file: string, changes: number): Promise<number> {
  const child = spawn(process.execPath, [fileURLToPath(new URL('./child.ts', import.meta.url)), file], {
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let said = '';
  let complaint = '';
  child.stderr.on('data', (data: Buffer) => (complaint += data));
  child.stdout.on('data', (data: Buffer) => {
    said += data;
    if (said.split('\n').length > changes) child.kill('SIGKILL');
  });
  const [, signal] = (await once(child, 'close')) as [number | null, string | null];
  if (signal !== 'SIGKILL') throw new Error(complaint);
  return Number(said.trimEnd().split('\n').at(-1));
}

describe('a process that is killed in the middle of its changes', () => {
  it('leaves a project that opens at the last change it was told was accepted, or the one under way', {
    timeout: 120_000,
  }, async () => {
    const { project, file, planId } = newProject();
    project.close();
    for (const changes of [1, 3, 7, 12, 20, 31]) {
      const accepted = await killedAfter(file, changes);
      const again = taken(openProject(file));
      const title = Number(titleOf(again, planId));
      expect(title === accepted || title === accepted + 1).toBe(true);
      expect(again.trail()).toHaveLength(title + 2);
      expect(codeOf(again.verifyTrail())).toBe('ok');
      expect(again.ways().undo).toBe('title');
      again.close();
    }
  });
});

describe('a file as a power cut would leave it, with half of a change on the disk and its journal beside', () => {
  /** Files copied in the midst of a transaction whose pages have spilled into the database already. */
  function cutOff(): { readonly file: string; readonly planId: number } {
    const { project, file, planId } = newProject();
    taken(project.changePlan({ planId, action: 'title', plan: planCalled('accepted') }));
    const writer = new Database(file);
    writer.pragma('cache_size = 1');
    writer.exec('BEGIN IMMEDIATE');
    writer.prepare('INSERT INTO input (sha256, bytes) VALUES (?, ?)').run('a'.repeat(64), Buffer.alloc(2_000_000, 1));
    writer.exec("UPDATE step SET action = 'half'; UPDATE plan SET name = 'half'");
    writer.prepare('INSERT INTO input (sha256, bytes) VALUES (?, ?)').run('b'.repeat(64), Buffer.alloc(2_000_000, 2));
    const image = join(folder(), 'image.steelyard');
    copyFileSync(file, image);
    copyFileSync(`${file}-journal`, `${image}-journal`);
    writer.exec('ROLLBACK');
    writer.close();
    return { file: image, planId };
  }

  it('is brought back to the last accepted change by opening it', () => {
    const { file, planId } = cutOff();
    const project = taken(openProject(file));
    expect([titleOf(project, planId), project.plans()[0]?.name, project.ways().undo]).toEqual([
      'accepted',
      'Main',
      'title',
    ]);
    expect(project.inputBytes('a'.repeat(64))).toBeNull();
    expect(codeOf(project.verifyTrail())).toBe('ok');
    expect(existsSync(`${file}-journal`)).toBe(false);
    project.close();
  });

  it('is brought back by a check too, which otherwise only reads', async () => {
    const { file } = cutOff();
    const untouched = () => Promise.reject(new Error('nothing should be rebuilt'));
    expect(codeOf(await checkProject(file, untouched))).toBe('ok');
  });

  it('is no good without its journal, and is then refused', () => {
    const { file } = cutOff();
    const alone = join(folder(), 'alone.steelyard');
    copyFileSync(file, alone);
    expect(codeOf(openProject(alone))).toBe('project-damaged');
  });
});
