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

  /** Puts a decision on record; what the program says where it is refused. */
  async function decide({ page }: Opened, text: string): Promise<void> {
    await goTo(page, 'Report');
    await page.getByLabel('What was decided').fill(text);
    await page.locator('[data-part=decisions]').getByLabel('Author').fill('R. Vos');
    await page.getByRole('button', { name: 'Put on record' }).click();
  }

  it('was taken away while open: says so unasked, what was typed stays, and all is well once it is put back', async () => {
    const file = copy();
    const opened = await launch();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await fitted(page);
    const away = `${file}.away`;
    renameSync(file, away);
    const trouble = page.getByRole('alert');
    await trouble.getByText('was removed or moved while it was open').waitFor();
    expect(await trouble.innerText()).toContain('save a copy under another name, or put the file back');
    await decide(opened, 'Nothing is lost.');
    await page.waitForTimeout(300);
    expect(await trouble.count()).toBe(1); // told once
    await opened.picture('trouble-taken-away');
    expect(await page.getByLabel('What was decided').inputValue()).toBe('Nothing is lost.');
    renameSync(away, file);
    await trouble.waitFor({ state: 'detached' });
    await page.getByRole('button', { name: 'Put on record' }).click();
    await page.locator('.decision', { hasText: 'Nothing is lost.' }).waitFor();
    await page.evaluate(() => window.steelyard.ask('project.close', {}));
    expect(check(file)).toBe(0);
  });

  it('was replaced while open: says so, leaves the other file alone, and is saved whole under another name', async () => {
    const file = copy();
    const opened = await launch();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await fitted(page);
    await decide(opened, 'Put down before.');
    await page.locator('.decision', { hasText: 'Put down before.' }).waitFor();
    const other = copy();
    const theirs = hashOf(other);
    renameSync(other, file);
    await page.getByRole('alert').getByText('Another file was put in the place of').waitFor();
    await page.getByLabel('What was decided').fill('Typed after.');
    await opened.picture('trouble-replaced');
    const mine = join(folder(), 'mine.steelyard');
    await opened.choose(mine);
    await page.getByRole('alert').getByRole('button', { name: 'Save a copy as' }).click();
    await page.getByRole('alert').waitFor({ state: 'detached' });
    await expect.poll(async () => (await look(opened)).file, { timeout: 20_000 }).toBe(mine);
    expect(await page.getByLabel('What was decided').inputValue()).toBe('Typed after.');
    await page.getByRole('button', { name: 'Put on record' }).click();
    await page.locator('.decision', { hasText: 'Typed after.' }).waitFor();
    expect((await look(opened)).decisions.map(({ text }) => text)).toEqual(['Put down before.', 'Typed after.']);
    await page.evaluate(() => window.steelyard.ask('project.close', {}));
    expect([check(mine), hashOf(file)]).toEqual([0, theirs]);
  });

  it('was removed while open: says so, and is saved whole under another name', async () => {
    const file = copy();
    const opened = await launch();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await fitted(page);
    rmSync(file);
    await page.getByRole('alert').getByText('was removed or moved while it was open').waitFor();
    const mine = join(folder(), 'mine.steelyard');
    await opened.choose(mine);
    await page.getByRole('alert').getByRole('button', { name: 'Save a copy as' }).click();
    await expect.poll(async () => (await look(opened)).file, { timeout: 20_000 }).toBe(mine);
    await decide(opened, 'It goes on.');
    await page.locator('.decision', { hasText: 'It goes on.' }).waitFor();
    await page.evaluate(() => window.steelyard.ask('project.close', {}));
    expect(check(mine)).toBe(0);
  });

  it('was written over while open: says so, and writes nothing more to it', async () => {
    const file = copy();
    const opened = await launch();
    const { page } = opened;
    expect(await openFile(opened, file)).toBe('');
    await fitted(page);
    const theirs = Buffer.from('Not a project any more.\n'.repeat(20_000));
    writeFileSync(file, theirs);
    await page.getByRole('alert').getByText('Another program wrote over').waitFor();
    await opened.picture('trouble-overwritten');
    await decide(opened, 'Too late.');
    expect(await page.getByRole('alert').innerText()).toContain('go back to a copy');
    await page.evaluate(() => window.steelyard.ask('project.close', {}));
    expect(readFileSync(file).equals(theirs)).toBe(true);
  });
});

describe('a file that is no table', () => {
  /** Lets a file of the disk go over the page, as the desktop does. */
  async function drop({ page }: Opened, file: string): Promise<void> {
    const cdp = await page.context().newCDPSession(page);
    const data = { items: [], files: [file], dragOperationsMask: 1 };
    for (const type of ['dragEnter', 'dragOver', 'drop'] as const)
      await cdp.send('Input.dispatchDragEvent', { type, x: 400, y: 400, data });
    await cdp.detach();
  }

  async function inNewProject(): Promise<Opened> {
    const opened = await launch();
    await opened.choose(join(folder(), 'new.steelyard'));
    await opened.page.getByRole('button', { name: 'New project …' }).click();
    await opened.page.getByRole('button', { name: 'Choose a file' }).waitFor();
    return opened;
  }

  it('but 200 MB of text is refused within seconds, chosen or dropped, with its size and what to do', async () => {
    const file = join(folder(), 'diary.txt');
    const pen = openSync(file, 'w');
    const text = Buffer.from('It rained again today, and nobody came. '.repeat(25_000));
    for (let written = 0; written < 200_000_000; written += text.length) writeSync(pen, text);
    closeSync(pen);
    const opened = await inNewProject();
    const { page } = opened;
    await opened.choose(file);
    const soon = { timeout: 4000 };
    await page.getByRole('button', { name: 'Choose a file' }).click();
    await page
      .getByRole('alert')
      .getByText(/has 200 megabytes, and files up to 100 megabytes are read/)
      .waitFor(soon);
    await opened.picture('trouble-large');
    await page.getByRole('button', { name: 'Put away' }).click();
    await drop(opened, file);
    await page
      .getByRole('alert')
      .getByText(/has 200 megabytes, and files up to 32 megabytes are read/)
      .waitFor(soon);
    // The window goes on at once.
    await goTo(page, 'Trail');
  });

  it('but a project is offered as one, chosen or dropped', async () => {
    const file = copy();
    const opened = await inNewProject();
    const { page } = opened;
    await drop(opened, file);
    const trouble = page.getByRole('alert');
    await trouble.getByText('“care.steelyard” is a project of this program, and not a table').waitFor();
    await page.getByRole('button', { name: 'Put away' }).click();
    await opened.choose(file);
    await page.getByRole('button', { name: 'Choose a file' }).click();
    await trouble.getByText('is a project of this program, and not a table').waitFor();
    await opened.picture('trouble-project-as-table');
    await trouble.getByRole('button', { name: 'Open it as a project' }).click();
    await fitted(page);
    expect((await look(opened)).file).toBe(file);
  });

  it('is told so; a table that is let go over any place is taken in under Data', async () => {
    const opened = await inNewProject();
    const { page } = opened;
    await goTo(page, 'Trail');
    const table = join(folder(), 'dropped.csv');
    writeFileSync(table, 'parish,y,n,x\nElm,1.5,10,1\nOak,2.5,20,2\nAsh,2.9,30,3\nFir,4.4,40,4\nYew,5.2,50,5\n');
    await drop(opened, table);
    await page.getByRole('heading', { name: 'What each column is' }).waitFor();
    await page.getByText('dropped.csv has 5 data rows in 4 columns').waitFor();
    await opened.picture('trouble-dropped');
    const letter = join(folder(), 'picture.png');
    writeFileSync(
      letter,
      Uint8Array.from({ length: 9000 }, (_, i) => (i * 37) % 256),
    );
    await drop(opened, letter);
    await page.getByRole('dialog').getByRole('alert').getByText('“picture.png”').waitFor();
  });
});

describe('a plan that is not finished', () => {
  it('has its way back after the project was closed and opened again', async () => {
    const file = join(folder(), 'draft.steelyard');
    const opened = await launch();
    const { page } = opened;
    await opened.choose(file);
    await page.getByRole('button', { name: 'New project …' }).click();
    await page.getByRole('button', { name: /^Paste a table/ }).click();
    await page.getByRole('main').locator('textarea').first().fill('parish,y,n\nElm,1.5,10\nOak,2.5,20\nAsh,2.9,30\n');
    await page.getByRole('button', { name: /^Take it in/ }).click();
    const row = page.getByRole('row', { name: /^parish/ });
    await row.getByRole('button', { name: 'names the cells' }).click();
    await page.getByRole('region', { name: 'What is “parish”?' }).getByText('something else').click();
    await row.getByRole('button', { name: 'something else' }).waitFor();
    await page.getByRole('button', { name: 'Undo: what the columns are' }).waitFor();
    await page.getByRole('button', { name: /^draft/ }).click();
    await page.getByRole('button', { name: 'Close the project' }).click();
    await page.getByRole('button', { name: 'draft', exact: true }).click();
    await goTo(page, 'Data');
    await row.getByRole('button', { name: 'something else' }).waitFor();
    await page.getByRole('button', { name: 'Undo: what the columns are' }).click();
    await row.getByRole('button', { name: 'names the cells' }).waitFor();
    await page.getByRole('button', { name: 'Redo: what the columns are' }).click();
    await row.getByRole('button', { name: 'something else' }).waitFor();
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
