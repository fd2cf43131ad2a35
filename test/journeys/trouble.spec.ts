import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import {
  chmodSync,
  closeSync,
  copyFileSync,
  mkdtempSync,
  openSync,
  readFileSync,
  renameSync,
  rmSync,
  statSync,
  truncateSync,
  writeFileSync,
  writeSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { ProjectLook } from '@core/protocol/bridge';
import { afterAll, beforeAll, describe, expect, it, onTestFinished } from 'vitest';
import { fitted, folder, goTo, type Opened, openDemo, openProgram } from './opened.ts';

const hashOf = (file: string) => createHash('sha256').update(readFileSync(file)).digest('hex');
const check = (file: string) => spawnSync(process.execPath, [resolve('out/main/command.js'), 'check', file]).status;

/** A project as the program itself made it, fitted and closed. */
let sound: string;
let made: string;

async function launch(options: Parameters<typeof openProgram>[0] = {}): Promise<Opened> {
  const opened = await openProgram(options);
  onTestFinished(async () => {
    await opened.app.close();
    expect(opened.complaints).toEqual([]);
  });
  return opened;
}

const look = async ({ page }: Opened) => {
  const outcome = await page.evaluate(() => window.steelyard.ask('project.look', {}));
  return (outcome as { value: ProjectLook }).value;
};

/** A copy of the sound project in a folder that goes with the test. */
function copy(): string {
  const file = join(folder(), 'care.steelyard');
  copyFileSync(sound, file);
  return file;
}

/** Opens a file by the chooser; what the program says of it, once it says something. */
async function openFile({ page, choose }: Opened, file: string): Promise<string> {
  await choose(file);
  await page.getByRole('button', { name: 'Open a project …' }).click();
  const trouble = page.getByRole('alert');
  await trouble.or(page.getByRole('navigation')).first().waitFor();
  return (await trouble.count()) === 0 ? '' : trouble.innerText();
}

/** Makes a folder that cannot be written, whoever runs the test: by its rights, or for root by a mount. */
function withoutWriting(path: string): void {
  if (process.getuid?.() !== 0) {
    chmodSync(path, 0o555);
    onTestFinished(() => chmodSync(path, 0o755));
    return;
  }
  const system = (...words: string[]) => spawnSync(words[0] as string, words.slice(1), { encoding: 'utf8' });
  expect(system('mount', '--bind', path, path).stderr).toBe('');
  onTestFinished(() => void system('umount', '-l', path));
  expect(system('mount', '-o', 'remount,bind,ro', path).stderr).toBe('');
}

beforeAll(async () => {
  made = mkdtempSync(join(tmpdir(), 'steelyard-sound-'));
  const opened = await openProgram();
  await openDemo(opened);
  const { file } = await look(opened);
  await opened.page.evaluate(() => window.steelyard.ask('project.close', {}));
  sound = join(made, 'sound.steelyard');
  copyFileSync(file, sound);
  await opened.app.close();
});
afterAll(() => rmSync(made, { recursive: true, force: true }));

describe('a project that cannot be opened', () => {
  it('was written by a newer version: is refused by name, with what to do, and left as it was', async () => {
    const file = copy();
    const header = openSync(file, 'r+');
    writeSync(header, Uint8Array.of(0, 0, 39, 15), 0, 4, 60); // SQLite's user_version: 9999
    closeSync(header);
    const before = hashOf(file);
    const opened = await launch();
    const said = await openFile(opened, file);
    expect(said).toContain('was written by a newer version');
    expect(said).toContain('Open it with that version; it was left untouched.');
    await opened.picture('trouble-newer');
    expect(hashOf(file)).toBe(before);
    await opened.page.getByRole('button', { name: 'Put away' }).click();
    await openDemo(opened);
  });

  it('is damaged: its end is missing, its pages are overwritten, or it is no project at all', async () => {
    const opened = await launch();
    const cut = copy();
    truncateSync(cut, Math.floor(statSync(cut).size / 2));
    const blotted = copy();
    const pen = openSync(blotted, 'r+');
    writeSync(pen, new Uint8Array(4096).fill(0xa5), 0, 4096, 65_536 * 2);
    closeSync(pen);
    const letter = join(folder(), 'letter.steelyard');
    writeFileSync(letter, 'Dear colleague, this is no project.\n'.repeat(200));
    for (const [file, says] of [
      [cut, /is damaged: .*It was left untouched; go back to a copy\./],
      [blotted, /is damaged: .*It was left untouched; go back to a copy\./],
      [letter, /is not a project of this program\. Choose a file NAME\.steelyard\./],
    ] as const) {
      const before = hashOf(file);
      expect(await openFile(opened, file)).toMatch(says);
      expect(hashOf(file)).toBe(before);
      await opened.picture('trouble-damaged');
      await opened.page.getByRole('button', { name: 'Put away' }).click();
    }
    await openDemo(opened);
  });

  it('is open in another window: says so, and opens once it is closed there', async () => {
    const file = copy();
    const first = await launch();
    expect(await openFile(first, file)).toBe('');
    const second = await launch();
    expect(await openFile(second, file)).toMatch(/is using .*Close it there, and try again\./);
    await second.picture('trouble-in-use');
    await first.page.evaluate(() => window.steelyard.ask('project.close', {}));
    await second.page.getByRole('button', { name: 'Put away' }).click();
    expect(await openFile(second, file)).toBe('');
    await fitted(second.page);
  });
});

describe('a project that cannot be written', () => {
  it('opens for reading: says that changes are not kept, bars what cannot be taken back, and can be saved elsewhere', async () => {
    const file = copy();
    withoutWriting(join(file, '..'));
    const before = hashOf(file);
    const opened = await launch();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await fitted(page);
    await page.getByText('This file cannot be written: what you change is not kept. Save a copy to go on.').waitFor();
    await goTo(page, 'Report');
    await page.locator('canvas[data-drawn="1"]').waitFor();
    expect(await page.getByRole('button', { name: 'Freeze an edition …' }).isDisabled()).toBe(true);
    await opened.picture('trouble-read-only');
    await page.getByRole('main').locator('.governed', { hasText: 'A4' }).click();
    await page.getByRole('button', { name: 'Letter' }).click();
    await page
      .getByRole('alert')
      .getByText('is write-protected. Choose another place, or lift the protection.')
      .waitFor();
    await page.getByRole('button', { name: 'Put away' }).click();
    const elsewhere = join(folder(), 'mine.steelyard');
    await opened.choose(elsewhere);
    await page.keyboard.press('Control+Shift+S');
    await expect.poll(async () => (await look(opened)).file, { timeout: 20_000 }).toBe(elsewhere);
    await page.getByText('This file cannot be written').waitFor({ state: 'detached' });
    expect(hashOf(file)).toBe(before);
  });

  it('stands on a full disk: says so, loses nothing, and goes on once there is room', async ({ skip }) => {
    const at = folder();
    const system = (...words: string[]) => spawnSync(words[0] as string, words.slice(1)).status;
    if (system('mount', '-t', 'tmpfs', '-o', 'size=3m', 'tmpfs', at) !== 0) return skip('needs leave to mount');
    onTestFinished(() => void system('umount', '-l', at));
    const file = join(at, 'care.steelyard');
    copyFileSync(sound, file);
    const opened = await launch();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await fitted(page);
    const head = (await look(opened)).decisions.length;
    writeFileSync(join(at, 'filler'), new Uint8Array(3_000_000 - statSync(file).size - 4096 * 3));
    await goTo(page, 'Report');
    const long = 'The disk is nearly full. '.repeat(20_000);
    await page.getByLabel('What was decided').fill(long);
    await page.locator('[data-part=decisions]').getByLabel('Author').fill('R. Vos');
    await page.getByRole('button', { name: 'Put on record' }).click();
    await page.getByRole('alert').getByText('The disk is full: ').waitFor();
    expect(await page.getByRole('alert').innerText()).toContain('Make room, and try again.');
    await opened.picture('trouble-full');
    expect((await look(opened)).decisions.length).toBe(head);
    expect((await page.getByLabel('What was decided').inputValue()).length).toBe(long.length);
    rmSync(join(at, 'filler'));
    system('mount', '-o', 'remount,size=40m', at);
    await page.getByRole('button', { name: 'Put on record' }).click();
    await page.locator('.decision').waitFor();
    await page.evaluate(() => window.steelyard.ask('project.close', {}));
    expect(check(file)).toBe(0);
  });

  it('was taken away while open: says so at the next change, and what was accepted is where it was taken to', async () => {
    const file = copy();
    const opened = await launch();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await fitted(page);
    const away = `${file}.away`;
    renameSync(file, away);
    await goTo(page, 'Report');
    await page.getByLabel('What was decided').fill('Nothing is lost.');
    await page.locator('[data-part=decisions]').getByLabel('Author').fill('R. Vos');
    await page.getByRole('button', { name: 'Put on record' }).click();
    const said = await page.getByRole('alert').innerText();
    expect(said).toContain('care.steelyard');
    expect(said).toMatch(/no longer|moved|taken|gone/);
    await opened.picture('trouble-taken-away');
    expect(await page.getByLabel('What was decided').inputValue()).toBe('Nothing is lost.');
    renameSync(away, file);
    await page.getByRole('button', { name: 'Put on record' }).click();
    await page.locator('.decision', { hasText: 'Nothing is lost.' }).waitFor();
    await page.evaluate(() => window.steelyard.ask('project.close', {}));
    expect(check(file)).toBe(0);
  });
});

describe('a trail that was changed by other hands', () => {
  it('is told as broken, with the entry and what to think of it, and is shown as it is stored', async () => {
    const file = copy();
    const bytes = readFileSync(file);
    const facts = bytes.indexOf('{"plan":1,"name":"Unpaid care by parish');
    expect(facts).toBeGreaterThan(0);
    bytes.write('Unpayd care', facts + '{"plan":1,"name":"'.length);
    writeFileSync(file, bytes);
    const opened = await launch();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await goTo(page, 'Trail');
    await page.getByText('The trail does not hold together.').waitFor();
    const said = await page.getByRole('alert').innerText();
    expect(said).toContain('The trail is broken at entry 2');
    expect(said).toContain('its hash is not that of its text');
    expect(await page.locator('[data-part=trail-head]').count()).toBe(0);
    expect(await page.locator('[data-entry="2"] .sentence').innerText()).toContain('Unpayd care');
    await opened.picture('trouble-trail');
    await page.evaluate(() => window.steelyard.ask('project.close', {}));
    expect(check(file)).toBe(5);
  });
});

describe('a window that is closed while it fits', () => {
  it('ends cleanly, and what was accepted is there when it is opened again', async () => {
    const file = copy();
    const opened = await openProgram();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await fitted(page);
    await page.locator('[data-part=statement] .governed').nth(1).click();
    await page.locator('.governing').getByRole('button', { name: 'nothing', exact: true }).click();
    await page.getByRole('button', { name: /^Undo: the variance/ }).waitFor();
    await opened.app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]?.close(), null);
    expect(await opened.app.ended).toBe(0);
    await opened.app.close();
    expect(opened.complaints).toEqual([]);
    expect(check(file)).toBe(0);

    const again = await launch({ words: [file] });
    await fitted(again.page);
    expect(await again.page.locator('[data-part=statement]').innerText()).toContain('nothing beyond it');
    await again.page.getByRole('button', { name: /^Undo: the variance/ }).waitFor();
  });
});

describe('words that would be a program', () => {
  const label = '<img src=x onerror="window.pwned=1">';
  const table = [
    'district,year,respondents,mean_hours,income',
    ...[label, 'Ashwell', '=1+2', '</svg><script>window.pwned=1</script>', 'Birkdale'].flatMap((district, i) =>
      [2024, 2025].map(
        (year, k) =>
          `"${district.replaceAll('"', '""')}",${year},${40 + 13 * i + k},${(8.13 + 0.41 * i + 0.17 * k + ((7 * i + k) % 5) / 10).toFixed(2)},${(i + 0.3 * k + 0.1).toFixed(1)}`,
      ),
    ),
  ].join('\n');

  it('stand as text on every screen, in the pages and in the trail, and run nowhere', async () => {
    const opened = await launch();
    const { page } = opened;
    await opened.choose(join(folder(), 'ill.steelyard'));
    await page.getByRole('button', { name: 'New project …' }).click();
    await page.getByRole('button', { name: /^Paste a table/ }).click();
    await page.getByRole('main').locator('textarea').first().fill(table);
    await page.getByRole('button', { name: /^Take it in/ }).click();
    await page.getByRole('heading', { name: 'What each column is' }).waitFor();
    await opened.picture('trouble-script-data');
    await page.getByRole('button', { name: /^Accept these data/ }).click();
    await page.getByRole('button', { name: /^State this structure/ }).click();
    await fitted(page);
    const quiet = async () => {
      expect(await page.evaluate(() => 'pwned' in window)).toBe(false);
      expect(await page.locator('img, body script, iframe, object').count()).toBe(0);
    };
    await page.locator('[data-part=arm] [role=slider]').focus();
    for (const place of ['Data', 'Variance', 'Fit', 'Report', 'Trail'] as const) {
      await goTo(page, place);
      if (place === 'Report') {
        await page.locator('canvas[data-drawn="1"]').waitFor();
        await page.getByLabel('What was decided').fill(`${label} was looked into.`);
        await page.locator('[data-part=decisions]').getByLabel('Author').fill('<i>R. Vos</i>');
        await page.getByRole('button', { name: 'Put on record' }).click();
        await page.locator('.decision', { hasText: `${label} was looked into.` }).waitFor();
        await page.getByRole('button', { name: 'Read as text' }).click();
        await page.locator('[data-part=running-text]').getByText(label).first().waitFor();
        await opened.picture('trouble-script');
      } else await page.waitForTimeout(400);
      await page.locator('[data-part=arm] [role=slider]').focus();
      await page.keyboard.press('Home');
      await quiet();
    }
    await page.getByText(`Decided: ${label} was looked into.`).waitFor();
    await page.getByText('<i>R. Vos</i>').waitFor();
    await quiet();
  });
});
