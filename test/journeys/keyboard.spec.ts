import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { ProjectLook } from '@core/protocol/bridge';
import type { Result } from '@core/protocol/result';
import { coefficientLines } from '@core/words/coefficients';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { fitted, type Opened, openProgram } from './opened.ts';

/** Hand-made: decimal commas, a confidential mark, a mark of its own, a footnote, a size of nought, a blank. */
const table = `district;year;respondents;mean_hours;income
Ashwell;2024;40;8,24;20,4
Ashwell;2025;51;8,40;20,6
Birkdale;2024;77;8,47;24,6
Birkdale;2025;88;9,32;26,2
Corran;2024;114;9,57;26,9
Corran;2025;125;c;27,1
Dunmere;2024;151;n.v.;29,4
Dunmere;2025;162;9,41;32,7
Elstow;2024;188;10,43*;35,2
Elstow;2025;199;10,40;32,8
Farleigh;2024;225;10,31;37,5
Farleigh;2025;0;10,73;38,4
Garth;2024;262;;38,3
Garth;2025;273;11,01;40,7
Holme;2024;299;11,31;41,7
Holme;2025;310;10,95;41,4
`;

const plain = (text: string): string => text.replace(/\s+/gu, '');

/** What has the focus, as a reader would hear it named. */
const focused = (page: Page) =>
  page.evaluate(() => {
    const at = document.activeElement as HTMLElement & { labels?: NodeListOf<HTMLElement> };
    return (at.ariaLabel ?? at.labels?.[0]?.innerText ?? at.innerText).trim();
  });

/** Goes on by Tab, or back, until what has the focus is so named. */
async function tabTo(page: Page, name: RegExp, key: 'Tab' | 'Shift+Tab' = 'Tab'): Promise<void> {
  const passed: string[] = [];
  for (let presses = 0; presses < 250; presses++) {
    await page.keyboard.press(key);
    const now = await focused(page);
    if (name.test(now)) return;
    passed.push(now);
  }
  throw new Error(`Tab reaches no ${name}; it passes ${[...new Set(passed)].join(' | ')}`);
}

const enter = async (page: Page, name: RegExp) => {
  await tabTo(page, name);
  await page.keyboard.press('Enter');
};

describe('the whole job, by keyboard alone', () => {
  let opened: Opened;
  let page: Page;
  let folder: string;
  let file: string;
  const type = (text: string) => page.keyboard.insertText(text);
  const look = async () => {
    const outcome = await page.evaluate(() => window.steelyard.ask('project.look', {}));
    return (outcome as { value: ProjectLook }).value;
  };

  beforeAll(async () => {
    folder = mkdtempSync(join(tmpdir(), 'steelyard-keys-'));
    file = join(folder, 'hours.steelyard');
    opened = await openProgram();
    page = opened.page;
  });
  afterAll(async () => {
    await opened?.app.close();
    rmSync(folder, { recursive: true, force: true });
  });

  it('brings a table with problem rows in, settles each, and accepts the cells', async () => {
    await opened.choose(file);
    await page.keyboard.press('Control+n');
    await page.getByRole('button', { name: 'Paste a table' }).waitFor();
    await enter(page, /^Paste a table/);
    await type(table);
    await enter(page, /^Take it in/);
    await page.getByRole('heading', { name: 'What each column is' }).waitFor();
    await opened.picture('keys-1-table');
    await enter(page, /^Confirm all/);
    await page.getByText('“n.v.” is not a number').waitFor();
    await enter(page, /^“n\.v\.” means: not collected$/);
    await page.getByText('“10,43*” is not a number').waitFor();
    await enter(page, /^“\*” is a footnote mark$/);
    await page.locator('[data-part=used]').waitFor();
    expect(await page.locator('[data-part=used]').innerText()).toBe('16 rows: 12 are used as cells, 4 are left out.');
    await opened.picture('keys-2-cells');
    await enter(page, /^Accept these data/);
    await page.getByRole('heading', { name: 'Variance', exact: true }).waitFor();
  });

  it('states the proposed structure, puts another beside it, and fits', async () => {
    await enter(page, /^State this structure/);
    await fitted(page);
    await enter(page, /^Put another structure beside/);
    await page.locator('.governing').waitFor();
    await page.keyboard.press('Enter'); // the first that is offered has the focus
    await page.locator('[data-part=candidates] tbody tr').nth(1).waitFor();
    await fitted(page);
    await page.keyboard.press('Control+3');
    await page.locator('[data-part=coefficients] [data-term=income]').waitFor();
    await opened.picture('keys-3-fit');
  });

  it('reads the price, and asks a question that the fit answers', async () => {
    await enter(page, /^Price$/);
    await page.locator('[data-part=price] table').first().waitFor();
    await opened.picture('keys-4-price');
    await enter(page, /^Ask a question/);
    await tabTo(page, /^What is asked/, 'Shift+Tab').catch(() => tabTo(page, /^What is asked/));
    await page.keyboard.type('Does a comb', { delay: 20 });
    await tabTo(page, /^times income/);
    await type('10');
    await tabTo(page, /^Its name/);
    await type('Ten of income');
    await page.keyboard.press('Enter');
    await page.locator('[data-part=question]', { hasText: 'Ten of income' }).waitFor();
    await fitted(page);
    await opened.picture('keys-5-question');
  });

  it('undoes by the action’s name, does it again, and puts a decision on record', async () => {
    await page.keyboard.press('Control+z');
    await page.locator('[data-part=question]', { hasText: 'Ten of income' }).waitFor({ state: 'detached' });
    expect(await page.getByRole('button', { name: /^Redo:/ }).innerText()).toBe('Redo: a question');
    await page.keyboard.press('Control+Shift+Z');
    await page.locator('[data-part=question]', { hasText: 'Ten of income' }).waitFor();
    await fitted(page);
    await page.keyboard.press('Control+4');
    await page.locator('[data-settled=true]').waitFor();
    await tabTo(page, /^What was decided/);
    await type('The proposed structure is kept.');
    await tabTo(page, /^Author/);
    await type('R. Vos');
    await page.keyboard.press('Enter');
    await page.locator('.decision', { hasText: 'The proposed structure is kept.' }).waitFor();
  });

  it('freezes an edition, closes the file and opens it again where it was', async () => {
    await page.keyboard.press('Control+e');
    await page.getByRole('dialog').waitFor();
    await type('R. Vos');
    await page.keyboard.press('Enter');
    await page.getByText(/^Edition 1 is frozen\./).waitFor();
    await opened.picture('keys-6-edition');
    await page.keyboard.press('Control+5');
    await page.getByText(/^The trail is whole/).waitFor();
    await tabTo(page, /^hours$/, 'Shift+Tab');
    await page.keyboard.press('Enter');
    await enter(page, /^Close the project/);
    await page.getByRole('heading', { name: 'Recent projects' }).waitFor();
    await enter(page, /^hours$/);
    await fitted(page);
    await page.keyboard.press('Control+4');
    await page.locator('[data-edition="1"]').waitFor();
    await page.locator('.decision', { hasText: 'The proposed structure is kept.' }).waitFor();
    await opened.picture('keys-7-reopened');
  });

  it('has on its screens, in result.json and on the pages the same numbers, text with text', async () => {
    const { plan, inputs } = (await look()).plans[0] as ProjectLook['plans'][number];
    const [input] = inputs;
    expect(input?.sha256).toBe(createHash('sha256').update(table).digest('hex'));
    writeFileSync(join(folder, input?.name ?? ''), table);
    writeFileSync(join(folder, 'plan.json'), JSON.stringify(plan));
    const { status, stderr } = spawnSync(
      process.execPath,
      [resolve('out/main/command.js'), 'run', join(folder, 'plan.json'), '--out', join(folder, 'out')],
      { encoding: 'utf8' },
    );
    expect(
      stderr.split('\n').filter((line) => line.startsWith('error')),
      stderr,
    ).toEqual([]);
    expect(status).toBe(0);
    const result = JSON.parse(readFileSync(join(folder, 'out/result.json'), 'utf8')) as Result;
    const lines = coefficientLines(result);

    // The pages: every line stands in the words that lie over them, and the bytes are those that `run` wrote.
    await page.locator('[data-settled=true]').waitFor();
    let words = '';
    const pages = Number(/takes (\d+) page/.exec(await page.getByRole('main').innerText())?.[1]);
    await page.locator('.sheet-view').focus();
    for (let number = 1; number <= pages; number++) {
      await page.locator(`canvas[data-drawn="${number}"]`).waitFor();
      words += (await page.locator('.words span').allTextContents()).join('');
      await page.keyboard.press('PageDown');
    }
    for (const line of lines) expect(plain(words)).toContain(plain(line));
    const printed = await page.evaluate(
      async (planId) => {
        const outcome = (await window.steelyard.ask('report.pages', { planId, edition: null })) as {
          value: { pdf: Uint8Array };
        };
        return [...outcome.value.pdf];
      },
      (await look()).plans[0]?.planId as number,
    );
    expect(Buffer.from(printed).equals(readFileSync(join(folder, 'out/report.pdf')))).toBe(true);

    // The screen: estimate, interval, error and ratio of each coefficient are parts of the very same line.
    await page.keyboard.press('Control+3');
    const rows = page.locator('[data-part=coefficients] tr[data-term]');
    await rows.first().waitFor();
    expect(await rows.count()).toBe(lines.length);
    for (const [i, line] of lines.entries()) {
      const [name, estimate, interval, , error, reference, ratio] = await rows.nth(i).locator('th, td').allInnerTexts();
      for (const part of [name, estimate, interval, error, reference, ratio])
        expect(plain(line)).toContain(plain(part as string));
    }
  });

  it('leaves a file that the command line finds whole, and no complaint on the console', async () => {
    await opened.app.close();
    const { status } = spawnSync(process.execPath, [resolve('out/main/command.js'), 'check', file]);
    expect(status).toBe(0);
    expect(opened.complaints).toEqual([]);
  });
});
