import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { Result } from '@core/protocol/result';
import { coefficientLines } from '@core/words/coefficients';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { goTo, type Opened, openDemo, openProgram } from './opened.ts';

/** The command line, built; answers its exit status. */
function steelyard(...words: string[]): number | null {
  return spawnSync(process.execPath, [resolve('out/main/command.js'), ...words], { encoding: 'utf8' }).status;
}

const main = (page: Page) => page.getByRole('main');
const governed = (page: Page, text: string | RegExp) => main(page).locator('.governed', { hasText: text });
const sheet = (page: Page) => page.locator('.sheet-view');

/** Waits until the page of a number has been drawn, with its words. */
async function drawn(page: Page, number: number): Promise<void> {
  await settled(page);
  await page.locator(`canvas[data-drawn="${number}"]`).waitFor();
}

/** Waits until the report on the screen is that of the plan as it stands. */
async function settled(page: Page): Promise<void> {
  await page.locator('[data-settled=true]').waitFor();
}

/** The words of every page, as they lie over the drawn pages; blanks and line ends alike. */
async function wordsOfAllPages(page: Page): Promise<string> {
  const texts: string[] = [];
  const all = Number((await governed(page, /^\d+ of \d+$/).innerText()).split(' of ')[1]);
  await sheet(page).focus();
  await page.keyboard.press('Home');
  for (let number = 1; number <= all; number++) {
    await drawn(page, number);
    texts.push((await page.locator('.words span').allTextContents()).join('\n'));
    await page.keyboard.press('ArrowRight');
  }
  return plain(texts.join('\n'));
}

const soon = { timeout: 20_000 };

/** Names of the report's sections, as the list of contents gives them. */
async function contents(page: Page): Promise<string> {
  await governed(page, /^\d+ of \d+$/).click();
  const names = await page.locator('.governing li').allInnerTexts();
  await page.keyboard.press('Escape');
  return names.join('\n');
}

/** The running text of the report that is shown. */
async function runningText(page: Page): Promise<string> {
  await page.getByRole('button', { name: 'Read as text' }).click();
  const text = await page.locator('[data-part=running-text]').innerText();
  await page.getByRole('button', { name: 'Show the pages' }).click();
  return plain(text);
}

/** Text without its blanks: lines are broken otherwise on paper. */
const plain = (text: string): string => text.replace(/\s+/gu, '');

describe('the report', () => {
  let opened: Opened;
  let page: Page;
  let folder: string;
  let result: Result;

  beforeAll(async () => {
    folder = mkdtempSync(join(tmpdir(), 'steelyard-report-'));
    expect(steelyard('run', 'resources/demo/plan.json', '--out', join(folder, 'run'))).toBe(0);
    result = JSON.parse(readFileSync(join(folder, 'run/result.json'), 'utf8')) as Result;
    opened = await openProgram();
    page = opened.page;
    await openDemo(opened);
    await goTo(page, 'Report');
    await drawn(page, 1);
  });
  afterAll(async () => {
    await opened?.app.close();
    rmSync(folder, { recursive: true, force: true });
  });

  it('shows the pages as they print, beside the line that governs them', async () => {
    await opened.picture('report-page-one');
    expect(plain(await page.locator('.words').innerText())).toContain(plain(result.plan.title));
    const canvas = await page.locator('.sheet-view canvas').evaluate((element: HTMLCanvasElement) => {
      const { data } = element.getContext('2d')?.getImageData(0, 0, element.width, element.height) ?? { data: [] };
      let dark = 0;
      for (let i = 0; i < data.length; i += 4) if ((data[i] as number) < 100) dark++;
      return { share: dark / (data.length / 4), shape: element.height / element.width };
    });
    expect(canvas.share).toBeGreaterThan(0.01);
    expect(canvas.shape).toBeCloseTo(841.89 / 595.28, 2);
  });

  it('prints the very bytes that `run` writes, and saves them', async () => {
    const file = join(folder, 'saved.pdf');
    await opened.choose(file);
    await page.getByRole('button', { name: 'Save the PDF …' }).click();
    await page.getByText(`Saved: ${file}`).waitFor();
    expect(readFileSync(file).equals(readFileSync(join(folder, 'run/report.pdf')))).toBe(true);
  });

  it('says of every coefficient on its pages, and in its running text, what result.json says', async () => {
    const lines = coefficientLines(result);
    expect(lines.length).toBe(result.fit.coefficients.length);
    const onPages = await wordsOfAllPages(page);
    const inText = await runningText(page);
    for (const line of lines) {
      expect(onPages).toContain(plain(line));
      expect(inText).toContain(plain(line));
    }
  });

  it('marks a cell on its pages that was marked on the arm', async () => {
    const { label } = result.cells.reduce((most, cell) =>
      (cell.cookDistance ?? 0) > (most.cookDistance ?? 0) ? cell : most,
    );
    const says = page.locator('[data-part=arm] output');
    await page.locator('[data-part=arm] [role=slider]').focus();
    await page.keyboard.press('Home');
    for (let steps = 0; !(await says.innerText()).startsWith(`${label}:`); steps++) {
      expect(steps).toBeLessThan(result.cells.length);
      await page.keyboard.press('ArrowRight');
    }
    await governed(page, /^\d+ of \d+$/).click();
    await page.getByRole('button', { name: /^Appendix: cells, page \d+$/ }).click();
    const marked = page.locator('.words .marked-here');
    await marked.first().waitFor();
    for (const text of await marked.allInnerTexts()) expect(text.trim()).toBe(label);
    await opened.picture('report-marked');
    await page.locator('[data-part=arm] [role=slider]').focus();
    await page.keyboard.press('Escape');
  });

  it('changes paper and sections where the line names them, and takes both back by undo', async () => {
    const shape = async () => {
      const box = await sheet(page).boundingBox();
      return box === null ? 0 : box.height / box.width;
    };
    await governed(page, 'A4').press('Enter');
    await opened.picture('report-paper');
    await page.getByRole('button', { name: 'Letter' }).press('Enter');
    await expect.poll(shape, soon).toBeCloseTo(11 / 8.5, 2);
    await settled(page);
    await governed(page, 'every section').click();
    await page.getByLabel('Evidence about the structure').uncheck();
    await governed(page, 'all but “Evidence about the structure”').waitFor();
    await settled(page);
    await page.keyboard.press('Escape');
    expect(await contents(page)).not.toContain('Evidence about the structure');
    await page.getByRole('button', { name: 'Undo: the report’s settings' }).click();
    await governed(page, 'every section').waitFor();
    await page.getByRole('button', { name: 'Undo: the report’s settings' }).click();
    await governed(page, 'A4').waitFor();
    await expect.poll(shape, soon).toBeCloseTo(841.89 / 595.28, 2);
    await settled(page);
    expect(await contents(page)).toContain('Evidence about the structure');
  });

  it('keeps a note beside the section that it is on, and undoes it by its name', async () => {
    await sheet(page).focus();
    await page.keyboard.press('Home');
    await drawn(page, 1);
    await governed(page, 'The variance statement').click();
    await page.getByLabel('Note on this section').fill('Discussed on 4 March with the producers of the table.');
    const keep = page.getByRole('button', { name: 'Keep the note' });
    expect(await keep.isDisabled()).toBe(true);
    await page.locator('.governing').getByLabel('Author').fill('R. Vos');
    await keep.click();
    await main(page).locator('.note', { hasText: 'Discussed on 4 March' }).waitFor();
    // It prints under its heading, with author and time, in the report as it stands.
    await settled(page);
    await expect
      .poll(() => runningText(page), soon)
      .toContain(plain('The variance statement Note: Discussed on 4 March with the producers of the table.'));
    expect(await runningText(page)).toMatch(/NoteR\.Vos,\d{4}-\d\d-\d\d\d\d:\d\dUTC/);
    await drawn(page, 1);
    await main(page).locator('.note', { hasText: 'Discussed on 4 March' }).scrollIntoViewIfNeeded();
    await opened.picture('report-note');
    await page.keyboard.press('Control+z');
    await main(page).locator('.note', { hasText: 'Discussed on 4 March' }).waitFor({ state: 'detached' });
    await page.getByRole('button', { name: 'Redo: a note' }).click();
    await main(page).locator('.note', { hasText: 'Discussed on 4 March' }).waitFor();
  });

  it('puts a decision on record with an author who was asked for, and a time', async () => {
    const decisions = page.locator('[data-part=decisions]');
    const put = decisions.getByRole('button', { name: 'Put on record' });
    await decisions.getByLabel('What was decided').fill('<b>Both parts</b> are kept: the squared residuals level off.');
    expect(await decisions.getByLabel('Author').inputValue()).toBe('');
    expect(await put.isDisabled()).toBe(true);
    await decisions.getByLabel('Author').fill('R. Vos');
    await put.click();
    const decision = decisions.locator('.decision');
    await decision.waitFor();
    expect(await decision.innerText()).toMatch(
      /^<b>Both parts<\/b> are kept: the squared residuals level off\. R\. Vos, \d{4}-\d\d-\d\d \d\d:\d\d UTC$/,
    );
  });

  it('freezes an edition by its key, shows its pages, makes it again to the last byte, and takes a signature', async () => {
    await page.keyboard.press('Control+e');
    const asking = page.getByRole('dialog', { name: 'Freeze an edition' });
    await opened.picture('report-freeze');
    await asking.getByLabel('Author').fill('R. Vos');
    await asking.getByRole('button', { name: 'Freeze', exact: true }).click();
    await page.getByText(/^Edition 1 is frozen\. Head of the trail after it: [0-9a-f]{64}\./).waitFor();
    const edition = page.locator('[data-edition="1"]');
    await edition.getByRole('button', { name: 'Show its pages' }).click();
    await governed(page, /^edition 1, frozen/).waitFor();
    await drawn(page, 1);
    const frozen = await runningText(page);
    expect(frozen).toContain(plain('are kept: the squared residuals level off'));
    expect(frozen).toContain(plain('Note: Discussed on 4 March with the producers of the table.'));
    await edition.getByRole('button', { name: 'Check it' }).click();
    await edition.getByText('result and report are the same to the last byte').waitFor();
    await edition.getByRole('button', { name: 'Sign off …' }).click();
    await page.getByLabel('In which role').fill('Reviewer');
    await page.getByRole('dialog').getByLabel('Author').fill('M. Lind');
    await page.getByRole('button', { name: 'Sign off', exact: true }).click();
    await edition.getByText(/^Reviewer: M\. Lind, \d{4}/).waitFor();
    await opened.picture('report-edition');
    await governed(page, /^edition 1, frozen/).click();
    await page.getByRole('button', { name: 'the plan stands now' }).click();
    await governed(page, 'A4').waitFor();
  });

  it('tells the trail as sentences, verified, with its head to copy', async () => {
    await goTo(page, 'Trail');
    await page.getByText(/^The trail is whole: \d+ entries, verified just now\./).waitFor();
    await opened.picture('trail');
    const sentences = await page.locator('[data-entry] .sentence').allInnerTexts();
    expect(sentences[0]).toBe('The project was created.');
    for (const wanted of [
      /^Decided: <b>Both parts<\/b> are kept/,
      /^A note was written on “The variance statement”: “Discussed on 4 March/,
      /^Undone: a note\.$/,
      /^Redone: a note\.$/,
      /^In the plan “.+” this was changed: the report’s settings\.$/,
      /^Undone: the report’s settings, in the plan “.+”\.$/,
      /^A fit of the plan “.+” was kept/,
      /^Edition 1 was frozen\.$/,
      /^Edition 1 was signed off, in the role “Reviewer”\.$/,
    ])
      expect(
        sentences.some((one) => wanted.test(one)),
        String(wanted),
      ).toBe(true);
    await page.getByRole('button', { name: 'Copy the head' }).click();
    await page.getByText('Copied', { exact: true }).waitFor();
    const head = await opened.app.evaluate(({ clipboard }) => clipboard.readText(), null);
    expect(head).toMatch(/^[0-9a-f]{64}$/);
    expect(plain(await page.locator('[data-part=trail-head]').innerText())).toBe(head);
    await page.locator('.governed', { hasText: 'every entry' }).click();
    await page.getByRole('button', { name: /^what cannot be taken back/ }).click();
    await page.getByText('A fit of the plan').first().waitFor({ state: 'detached' });
  });

  it('shows no page, no text and no freezing while the answer is covered, and all again once it is uncovered', async () => {
    await goTo(page, 'Variance');
    const cover = page.locator('[data-part=cover]');
    await cover.getByLabel('Your name').fill('R. Vos');
    await cover.getByRole('button', { name: 'Cover the answer' }).click();
    await cover.getByRole('button', { name: /uncover the answer$/ }).waitFor();
    await goTo(page, 'Report');
    await page.locator('[data-part=covered]').waitFor();
    expect(await page.locator('.sheet-view, [data-part=running-text], .words').count()).toBe(0);
    expect(await page.getByRole('button', { name: 'Freeze an edition …' }).isDisabled()).toBe(true);
    await page.keyboard.press('Control+e');
    await page.getByText('While the answer is covered no edition is frozen.').waitFor();
    expect(await page.getByRole('dialog').count()).toBe(0);
    await opened.picture('report-covered');
    await goTo(page, 'Variance');
    await cover.getByLabel('Your name').fill('R. Vos');
    await cover.getByRole('button', { name: /uncover the answer$/ }).click();
    await cover.getByRole('button', { name: 'Cover the answer' }).waitFor();
    await goTo(page, 'Report');
    await drawn(page, 1);
    expect(await page.getByRole('dialog').count()).toBe(0);
    await goTo(page, 'Trail');
    await page.getByText(/^The answer was covered: /).waitFor();
    await page.getByText(/^The answer was uncovered: /).waitFor();
  });

  it('leaves a file that the command line checks and finds whole', async () => {
    const look = await page.evaluate(() => window.steelyard.ask('project.look', {}));
    const { file } = (look as { value: { file: string } }).value;
    await page.evaluate(() => window.steelyard.ask('project.close', {}));
    expect(steelyard('check', file)).toBe(0);
  });

  it('leaves no complaint on the console', () => {
    expect(opened.complaints).toEqual([]);
  });
});
