import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { type AppHandle, launchApp } from '../standin/launch.ts';

/** Hand-made: decimal commas, a confidential mark, a mark of its own, a footnote, a size of nought, a blank. */
const hours = `district;year;respondents;mean_hours;income;note
Ashwell;2024;40;8,24;20,4;
Ashwell;2025;51;8,40;20,6;
Birkdale;2024;77;8,47;24,6;
Birkdale;2025;88;9,32;26,2;
Corran;2024;114;9,57;26,9;
Corran;2025;125;c;27,1;
Dunmere;2024;151;n.v.;29,4;
Dunmere;2025;162;9,41;32,7;
Elstow;2024;188;10,43*;35,2;
Elstow;2025;199;10,40;32,8;
Farleigh;2024;225;10,31;37,5;
Farleigh;2025;0;10,73;38,4;
Garth;2024;262;;38,3;
Garth;2025;273;11,01;40,7;
Holme;2024;299;11,31;41,7;
Holme;2025;310;c;41,4;
`;
/** The same a year on: a district more, one less, a revised mean. */
const revised = hours
  .replace('Ashwell;2024;40;8,24', 'Ashwell;2024;40;8,29')
  .replace('Holme;2024;299;11,31;41,7;', 'Ilmore;2024;330;11,90;44,0;');
const rents = `area,rent\nAshwell,410\nBirkdale,433\nCorran,470\nDunmere,455\nElstow,502\nFarleigh,511\nGarth,530\n`;

const shots = join('node_modules/.cache', 'journeys');
let folder: string;
let app: AppHandle;
let page: Page;
let errors: string[] = [];

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'steelyard-data-'));
  mkdirSync(shots, { recursive: true });
  writeFileSync(join(folder, 'hours.csv'), hours);
  writeFileSync(join(folder, 'hours-2026.csv'), revised);
  writeFileSync(join(folder, 'rents.csv'), rents);
  writeFileSync(
    join(folder, 'picture.csv'),
    Uint8Array.from({ length: 4000 }, (_, i) => (i * 37) % 256),
  );
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

let projects = 0;
beforeEach(async () => {
  errors = [];
  app = await launchApp();
  page = await app.firstWindow();
  page.on('pageerror', (error) => errors.push(error.message));
  page.on('console', (message) => message.type() === 'error' && errors.push(message.text()));
  await page.locator('[data-ready=true]').waitFor();
  const file = join(folder, `journey-${++projects}.steelyard`);
  await app.evaluate(({ dialog }, filePath) => {
    dialog.showSaveDialog = (async () => ({ canceled: false, filePath })) as never;
  }, file);
  await toChoose('hours.csv');
});
afterEach(async () => {
  await app.close();
  expect(errors).toEqual([]);
});

/** What the next chooser will give. */
async function toChoose(name: string): Promise<void> {
  await app.evaluate(
    ({ dialog }, file) => {
      dialog.showOpenDialog = (async () => ({ canceled: false, filePaths: [file] })) as never;
    },
    join(folder, name),
  );
}

const shot = (name: string) => page.screenshot({ path: join(shots, `${name}.png`) });
const button = (name: string | RegExp) => page.getByRole('button', { name });
const used = () => page.locator('[data-part=used]');

async function takeHours(): Promise<void> {
  await button('New project').click();
  await button('Choose a file').click();
  await page.getByRole('heading', { name: 'What each column is' }).waitFor();
}

/** Confirms the marks as proposed, and mends the two that are left. */
async function mend(): Promise<void> {
  await button('Confirm all as proposed').click();
  await button('“n.v.” means: not collected').click();
  await button('“*” is a footnote mark').click();
  await used().waitFor();
}

describe('Start', () => {
  it('offers the demo one click away, a new project, an old one, and the recent ones, which can be forgotten', async () => {
    await shot('start');
    await button('Open the demo').click();
    await page.getByText('divided by the number of respondents').first().waitFor();
    await button(/demo/).first().click();
    await button('Close the project').click();
    await page.getByRole('heading', { name: 'Recent projects' }).waitFor();
    await page.getByRole('button', { name: 'Unpaid care (demo)' }).waitFor();
    await button('Forget this list').click();
    await page.getByText('will be listed here').waitFor();
  });
});

describe('Data, by mouse', () => {
  it('takes a CSV with problem rows from a chooser to accepted cells, every step explained and undoable', async () => {
    await takeHours();
    await page.getByText('its fields parted by').waitFor();
    const reading = await page.getByText('has 16 data rows').innerText();
    expect(reading).toContain('hours.csv has 16 data rows in 6 columns');
    expect(reading).toContain('semicolons');
    expect(reading).toContain('the decimal mark a comma');
    const roles = page.getByRole('table', { name: 'What each column is' });
    const rows = await roles.getByRole('row').allInnerTexts();
    expect(rows.find((row) => row.startsWith('district'))).toMatch(
      /names the cells\s+proposed because its 8 texts repeat/,
    );
    expect(rows.find((row) => row.startsWith('respondents'))).toMatch(
      /the group size, taken as exact\s+proposed because of its name/,
    );
    expect(rows.find((row) => row.startsWith('mean_hours'))).toContain('the outcome, a mean or rate');
    expect(rows.find((row) => row.startsWith('income'))).toContain('yes, as a number');
    await shot('data-taken');

    // Nothing is accepted while a matter stands in the way.
    expect(await button('Accept these data').isDisabled()).toBe(true);
    await button('Confirm all as proposed').click();
    await page.getByText('“n.v.” is not a number').waitFor();
    await shot('data-problems');
    await button('“n.v.” means: not collected').click();
    await page.getByText('“10,43*” is not a number').waitFor();
    await button('“*” is a footnote mark').click();
    expect(await used().innerText()).toBe('16 rows: 11 are used as cells, 5 are left out.');
    await button('Undo: what a token means').click();
    await page.getByText('“10,43*” is not a number').waitFor();
    await button('Redo: what a token means').click();
    expect(await used().innerText()).toBe('16 rows: 11 are used as cells, 5 are left out.');

    // Rows left out stay in the record, each with its reason.
    const left = page.getByRole('table', { name: 'Rows that are left out' });
    const reasons = (await left.getByRole('row').allInnerTexts()).join('\n');
    expect(reasons).toMatch(/Corran · 2025\s+6\s+mean_hours suppressed as confidential, found “c”/);
    expect(reasons).toMatch(/Dunmere · 2024\s+7\s+mean_hours not collected, found “n.v.”/);
    expect(reasons).toMatch(/Farleigh · 2025\s+12\s+respondents .* not above zero, found “0”/);
    expect(reasons).toMatch(/Garth · 2024\s+13\s+mean_hours left blank/);

    // The register: a line a block, a glyph a cell, totals in both margins.
    const register = page.locator('[data-part=register]');
    expect(await register.getByRole('row').nth(3).innerText()).toMatch(/Corran\s+●\s+◐\s+1\/2/);
    expect(await register.locator('tfoot').innerText()).toMatch(/present\s+6\/8\s+5\/8\s+11\/16/);
    await register.getByRole('button', { name: 'Holme · 2024: present' }).click();
    expect(await page.locator('[data-figure=glance] .ring').textContent()).toBe('Holme · 2024');
    await page.locator('[data-figure=glance]').scrollIntoViewIfNeeded();
    await shot('data-register');

    await button('Accept these data').click();
    await page.getByRole('heading', { name: 'Variance', exact: true }).waitFor();
  });

  it('lets a role, a unit, the decimal mark and the delimiter be said anew beside the line that they govern', async () => {
    await takeHours();
    const roles = page.getByRole('table', { name: 'What each column is' });
    const row = (name: string) => roles.getByRole('row', { name: new RegExp(`^${name}`) });
    await row('income').getByRole('button', { name: 'something else' }).click();
    const choices = page.getByRole('region', { name: 'What is “income”?' });
    await choices.waitFor();
    expect(await choices.getByRole('button', { name: 'a sum of survey weights' }).isDisabled()).toBe(true);
    expect(await choices.innerText()).toContain('An error of 2.0 makes the variance 4.0, a relative weight of 0.25.');
    const line = await row('income').boundingBox();
    const panel = await choices.boundingBox();
    expect(Math.abs((panel?.y ?? 0) - (line?.y ?? 0))).toBeLessThan(40);
    await shot('data-role');
    await choices.getByRole('button', { name: 'the standard error' }).click();
    await row('income').getByRole('button', { name: 'the standard error' }).waitFor();
    expect(await page.evaluate(() => document.activeElement?.textContent)).toBe('the standard error');
    // What was changed last is the one thing in the accent.
    expect(await page.locator('.governed.changed').allInnerTexts()).toEqual(['the standard error']);

    await row('mean_hours').getByRole('button', { name: 'no unit' }).click();
    await page.getByLabel('Unit, as it should stand behind a number').fill('hours per week');
    await page.keyboard.press('Enter');
    await row('mean_hours').getByRole('button', { name: 'hours per week' }).waitFor();

    await page.getByRole('button', { name: 'semicolons' }).click();
    await page.getByRole('button', { name: 'commas', exact: true }).click();
    await page.getByText('has 8 fields').or(page.getByText('fields, and the header')).first().waitFor();
    await button('Undo: how the file is read').click();
    await page.getByText('in 6 columns').waitFor();
  });

  it('joins a file by its keys, derives a column, leaves rows out by a rule with a reason, and takes each back', async () => {
    await takeHours();
    await mend();
    await toChoose('rents.csv');
    await button('Join a file').click();
    await button('Join it to “hours.csv”').click();
    await page.getByLabel('in hours.csv').selectOption('district');
    await page.getByLabel('in rents.csv').selectOption('area');
    await shot('data-join');
    await button('Add it').click();
    await page.getByText('Joined with “rents.csv” on district = area.').waitFor();
    await page.getByText('1 key met nothing in a join').waitFor();

    await button('Derive a column').click();
    await page.getByLabel('Kind').selectOption('ratio');
    await page.getByLabel('of', { exact: true }).selectOption('income');
    await page.getByLabel('over', { exact: true }).selectOption('rent');
    await page.getByLabel('Name', { exact: true }).fill('income_by_rent');
    await button('Add it').click();
    await page.getByText('Derived “income_by_rent”: income over rent.').waitFor();

    await button('Leave rows out').click();
    await page.getByLabel('Leave out rows where').selectOption('district');
    await page.getByLabel('One text a line').fill('Garth');
    expect(await button('Add it').isDisabled()).toBe(true);
    await page.getByLabel('because', { exact: true }).fill('boundary moved');
    await button('Add it').click();
    await page.getByText('Left out where district is Garth: boundary moved.').waitFor();
    await page.getByText('10 are used as cells').waitFor();
    expect(await page.locator('[data-part=register]').innerText()).toContain('✕');
    await shot('data-steps');
    await button(/^Take it back: Left out where/).click();
    await page.getByText('11 are used as cells').waitFor();
    expect(await page.getByText('Left out where').count()).toBe(0);
  });

  it('keeps the draft through closing and opening again', async () => {
    await takeHours();
    await mend();
    await page.getByRole('button', { name: /^journey-/ }).click();
    await button('Close the project').click();
    await page.getByRole('heading', { name: 'Recent projects' }).waitFor();
    await page.getByRole('button', { name: /^journey-/ }).click();
    await used().waitFor();
    expect(await used().innerText()).toBe('16 rows: 11 are used as cells, 5 are left out.');
  });

  it('shows what next year’s file would add, lose and change before it takes the place of the old', async () => {
    await takeHours();
    await mend();
    await button('Accept these data').click();
    await page.getByRole('heading', { name: 'Variance', exact: true }).waitFor();
    await button('State this structure').click();
    await page.getByText('11 cells; the heaviest').waitFor();
    await page.getByRole('link', { name: 'Data' }).click();
    await used().waitFor();
    await toChoose('hours-2026.csv');
    await page.getByRole('heading', { name: 'Replace the data' }).scrollIntoViewIfNeeded();
    await button('Choose a file').click();
    await button('Replace “hours.csv” by it').click();
    const replacement = page.locator('[data-part=replacement]');
    await replacement.waitFor();
    const text = await replacement.innerText();
    expect(text).toContain('1 cell is added: Ilmore · 2024.');
    expect(text).toContain('1 cell is lost: Holme · 2024.');
    expect(text).toContain('1 value is changed, in 1 cell.');
    expect(text).toMatch(/Ashwell · 2024\s+mean_hours\s+8,24\s+8,29/);
    await shot('data-replace');
    await replacement.getByRole('button', { name: 'Replace the data' }).click();
    await page.getByText('hours-2026.csv has 16 data rows').waitFor();
    await page.getByRole('button', { name: 'Undo: the data replaced' }).click();
    await page.getByText('hours.csv has 16 data rows').waitFor();
  });

  it('says what is wrong with a file that is no table, and loses nothing', async () => {
    await button('New project').click();
    await toChoose('picture.csv');
    await button('Choose a file').click();
    await page.locator('[data-part=problems] li').first().waitFor();
    expect(await page.locator('[data-part=problems] li').first().innerText()).toMatch(/picture\.csv/);
    await shot('data-no-table');
    await toChoose('hours.csv');
    await button('Choose a file').click();
    await button('A new plan from it').click();
    await page.getByText('hours.csv has 16 data rows').waitFor();
  });
});

describe('Data that mean ill, or are no data', () => {
  /** Lets a file go on the page, as from the desktop. */
  const drop = (name: string, text: string, size = 0) =>
    page.evaluate(
      ([called, content, bytes]) => {
        const transfer = new DataTransfer();
        transfer.items.add(new File([content as string, new Uint8Array(bytes as number)], called as string));
        window.dispatchEvent(new DragEvent('drop', { dataTransfer: transfer, bubbles: true, cancelable: true }));
      },
      [name, text, size] as const,
    );

  it('takes a dropped file, and shows a script in a label as the text that it is', async () => {
    await button('New project').click();
    await button('Choose a file').waitFor();
    const label = '<img src=x onerror=alert(1)>';
    await drop('ill.csv', hours.replaceAll('Ashwell', label));
    await mend();
    await page
      .locator('[data-part=register]')
      .getByRole('button', { name: `${label} · 2024: present` })
      .click();
    expect(await page.locator('[data-figure=glance]').innerText()).toContain(`${label} · 2024`);
    expect(await page.locator('img').count()).toBe(0);
  });

  it('says that a file is too large before it is read, and that a file is no project', async () => {
    await button('New project').click();
    await button('Choose a file').waitFor();
    await drop('huge.csv', 'a,b\n', 65_000_000);
    await page.getByText('files up to 32 megabytes are read').waitFor();
    await button('Put away').click();
    await page.getByRole('button', { name: /^journey-/ }).click();
    await button('Close the project').click();
    await page.getByRole('heading', { name: 'Recent projects' }).waitFor();
    await toChoose('picture.csv');
    await button('Open a project').click();
    await page.getByText('is not a project of this program').waitFor();
    await shot('start-no-project');
  });

  it('says what to do where a column of words is taken for the outcome', async () => {
    await takeHours();
    await mend();
    const row = page.getByRole('row', { name: /^district/ });
    await row.getByRole('button', { name: 'names the cells' }).click();
    await page.getByRole('region', { name: 'What is “district”?' }).getByText('the outcome, a mean or rate').click();
    const problems = page.locator('[data-part=problems]');
    await problems.getByText('“Ashwell” is not a number').waitFor();
    await shot('data-words');
    await button('“district” holds words: it is something else').click();
    await row.getByRole('button', { name: 'something else' }).waitFor();
    await button('Undo: what the columns are').click();
    await button('Undo: what the columns are').click();
    await used().waitFor();
  });
});

describe('Data, by keyboard alone', () => {
  it('goes from the start to accepted cells without a pointer: pasted table, role, mark, register, accepted', async () => {
    const press = async (...keys: string[]) => {
      for (const key of keys) await page.keyboard.press(key);
    };
    /** Goes on by Tab until a control of that name has the focus. */
    const tabTo = async (name: RegExp) => {
      for (let i = 0; i < 150; i++) {
        await press('Tab');
        const now = await page.evaluate(() => {
          const at = document.activeElement;
          return at?.getAttribute('aria-label') ?? (at instanceof HTMLElement ? at.innerText : '');
        });
        if (name.test(now)) return;
      }
      throw new Error(`Tab reaches no ${name}`);
    };
    await press('Control+n');
    await page.getByRole('button', { name: 'Paste a table' }).waitFor();
    await tabTo(/^Paste a table/);
    await press('Enter');
    await page.keyboard.insertText(hours);
    await tabTo(/^Take it in/);
    await press('Enter');
    await page.getByRole('heading', { name: 'What each column is' }).waitFor();
    await tabTo(/^Confirm all/);
    await press('Enter');
    await page.getByText('“n.v.” is not a number').waitFor();
    await tabTo(/^“n\.v\.” means: not collected$/);
    await press('Enter');
    await page.getByText('“10,43*” is not a number').waitFor();
    await tabTo(/^“\*” is a footnote mark$/);
    await press('Enter');
    await used().waitFor();
    expect(await page.evaluate(() => document.activeElement?.getAttribute('role'))).toBe('status');

    // A role said anew: Escape leaves the margin, and the focus is back on the line.
    await tabTo(/^something else$/);
    await press('Enter', 'Escape');
    expect(await page.evaluate(() => document.activeElement?.textContent)).toBe('something else');
    await tabTo(/^Ashwell · 2024: present$/);
    await press('ArrowDown', 'ArrowRight');
    expect(await page.evaluate(() => document.activeElement?.getAttribute('aria-label'))).toBe(
      'Birkdale · 2025: present',
    );
    await shot('data-keyboard');
    await tabTo(/^Accept these data/);
    await press('Enter');
    await page.getByRole('heading', { name: 'Variance', exact: true }).waitFor();
    await press('Control+1');
    await page.getByRole('heading', { name: 'Data', exact: true }).waitFor();
    expect(await page.evaluate(() => document.activeElement?.id)).toBe('page-title');
  });
});

/** A saved drawing names nothing outside itself, and its letters are drawn with the face that it carries, on a page that has no other. */
async function standsAlone(svg: string): Promise<void> {
  expect(svg).toMatch(/^<svg/);
  expect(svg.replace(/xmlns(:xlink)?="[^"]*"/g, '')).not.toMatch(/https?:|file:|app:|url\((?!data:|#)|@import/);
  const context = await page.context().browser()?.newContext();
  if (!context) throw new Error('no browser');
  try {
    const alone = await context.newPage();
    await alone.goto('about:blank');
    const found = await alone.evaluate(async (text) => {
      document.body.innerHTML = text;
      await document.fonts.ready;
      const faces = [...document.fonts].map(({ family, status }) => `${family.replaceAll('"', '')} ${status}`);
      const words = [...document.querySelectorAll('text')].filter((one) => (one.textContent ?? '').length > 3);
      const lengths = words.map((one) => {
        const carried = one.getComputedTextLength();
        one.style.fontFamily = 'monospace';
        return [carried, one.getComputedTextLength()];
      });
      return { faces, lengths };
    }, svg);
    expect(found.faces).toEqual(['Steelyard Note loaded']);
    expect(found.lengths.length).toBeGreaterThan(2);
    for (const [carried, other] of found.lengths) expect(carried).not.toBe(other);
  } finally {
    await context.close();
  }
}

describe('the foundation', () => {
  it('takes even the plan back and brings it again, each by its name', async () => {
    await button('Open the demo').click();
    await page.getByText('56 cells; the heaviest').waitFor();
    await button('Undo: a new plan').click();
    await page.getByText('No fit yet').waitFor();
    await button('Redo: a new plan').click();
    await page.getByText('56 cells; the heaviest').waitFor();
  });

  it('marks a cell along the arm by keys, on the figures too, and keeps the mark from screen to screen', async () => {
    await button('Open the demo').click();
    const arm = page.getByRole('slider');
    await page.getByText('56 cells; the heaviest').waitFor();
    await arm.focus();
    await page.keyboard.press('End');
    const marked = (await arm.getAttribute('aria-valuetext'))?.split(':')[0] as string;
    await page.getByRole('link', { name: 'Data' }).click();
    await page.locator('[data-figure=glance] svg').waitFor();
    expect(await page.locator('[data-figure=glance] .ring').textContent()).toBe(marked);
    expect(await page.locator('[data-part=register] .marked').getAttribute('aria-label')).toContain(marked);
    await page.getByRole('link', { name: 'Trail' }).click();
    expect(await arm.getAttribute('aria-valuetext')).toContain(marked);
  });

  it('shows a figure’s numbers by one key, copies tables as text, and saves CSV, SVG and PNG', async () => {
    await button('Open the demo').click();
    await page.getByText('56 cells; the heaviest').waitFor();
    await page.getByRole('link', { name: 'Data' }).click();
    const figure = page.locator('[data-figure=glance]');
    await figure.getByRole('group').focus();
    await page.keyboard.press('t');
    await figure.getByRole('table').waitFor();
    await figure.getByRole('button', { name: 'Copy', exact: true }).click();
    await figure.getByText('Copied').waitFor();
    const text = await app.evaluate(({ clipboard }) => clipboard.readText(), null);
    expect(text.split('\n')).toHaveLength(57);
    expect(text.split('\n')[1]).toBe('Arlow Green · 2023\t734\t11.87');
    const save = async (name: string, file: string) => {
      await app.evaluate(
        ({ dialog }, filePath) => {
          dialog.showSaveDialog = (async () => ({ canceled: false, filePath })) as never;
        },
        join(folder, file),
      );
      await figure.getByRole('button', { name }).click();
      await figure.getByText(file).waitFor();
    };
    await save('Save as CSV', 'glance.csv');
    expect(readFileSync(join(folder, 'glance.csv'), 'utf8').split('\n')[1]).toBe('Arlow Green · 2023,734,11.87');
    await save('Save as SVG', 'glance.svg');
    await standsAlone(readFileSync(join(folder, 'glance.svg'), 'utf8'));
    await save('Save as PNG', 'glance.png');
    expect([...readFileSync(join(folder, 'glance.png')).subarray(1, 4)]).toEqual([0x50, 0x4e, 0x47]);
  });

  it('opens the choices of the statement’s phrases in the margin, refits when one is taken, and can undo it by name', async () => {
    await button('Open the demo').click();
    await page.getByText('56 cells; the heaviest').waitFor();
    const statement = page.locator('[data-part=statement]');
    const before = await statement.innerText();
    await statement.getByRole('button', { name: /divided by the number/ }).click();
    await page.getByRole('button', { name: 'the same for every cell', exact: true }).click();
    await page.waitForFunction(
      (text) => (document.querySelector('[data-part=statement]') as HTMLElement).innerText !== text,
      before,
    );
    await page.getByRole('button', { name: 'Undo: the variance' }).click();
    await page.waitForFunction(
      (text) => (document.querySelector('[data-part=statement]') as HTMLElement).innerText === text,
      before,
    );
  });
});
