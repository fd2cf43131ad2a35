// Controls for every key of the plan that states a structure, errors, tests and limits: what is chosen stands in the plan and is fitted, what the
// fit found is read on the screen, and all of it can be undone by name.
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { type LatestFit, type ProjectLook, readLatest } from '@core/protocol/bridge';
import type { Table } from '@core/protocol/page-table';
import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import { boundSentence } from '@core/words/bounds';
import { individualSentences, individualTable } from '@core/words/individual';
import { inferenceSentences, wildTable } from '@core/words/inference';
import { boundsTable, takesTable, togetherTable } from '@core/words/limit-tables';
import { parameterText } from '@core/words/parameter-text';
import { fitSections, fitTexts } from '@core/words/screen-fit';
import { coefficientsTable } from '@core/words/screen-fit-tables';
import { statementPieces } from '@core/words/screen-statement';
import { independenceSentence, methodSentence } from '@core/words/statement';
import type { Locator, Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { axeFaults, layoutFaults } from './faults.ts';
import { fitted, goTo, type Opened, openDemo, openProgram } from './opened.ts';

const SOON = { timeout: 20_000, interval: 100 };

let opened: Opened;
let page: Page;
let folder: string;

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'steelyard-contract-'));
  opened = await openProgram();
  page = opened.page;
  await openDemo(opened);
});
afterAll(async () => {
  await opened?.app.close();
  rmSync(folder, { recursive: true, force: true });
});

const panel = (): Locator => page.locator('.governing');

/** What main answers a question of the page. */
async function ask<T>(question: string, payload: object): Promise<T> {
  const answer = await page.evaluate(
    (asked) =>
      (
        window as unknown as { steelyard: { ask: (question: string, payload: object) => Promise<unknown> } }
      ).steelyard.ask(asked.question, asked.payload),
    { question, payload },
  );
  return (answer as { readonly value: T }).value;
}

/** The project as main has it. */
function look(): Promise<ProjectLook> {
  return ask('project.look', {});
}

/** Waits until the kept plan has what is expected of it. */
function planHas(expected: object): Promise<void> {
  return vi.waitFor(async () => expect((await look()).plans.at(-1)?.plan).toMatchObject(expected), SOON);
}

async function planNow(): Promise<Plan> {
  return (await look()).plans.at(-1)?.plan as Plan;
}

/** Opens what governs a phrase and takes one of its choices. */
async function choose(phrase: Locator, choice: string | RegExp): Promise<void> {
  await phrase.click();
  await panel().getByRole('button', { name: choice }).first().click();
}

/** Opens a phrase that is settled by columns, ticks these alone, and keeps them. */
async function chooseColumns(phrase: Locator, columns: readonly string[], within: Locator = panel()): Promise<void> {
  await phrase.click();
  for (const box of await within.getByRole('checkbox').all()) await box.uncheck();
  for (const column of columns) await within.getByRole('checkbox', { name: column, exact: true }).check();
  await within.getByRole('button', { name: 'Keep' }).last().click();
}

/** Takes changes back until the plan is as it was. */
async function undoTo(plan: Plan): Promise<void> {
  // A step may change a file alone: the plan reads the same before and after it.
  for (let steps = 0; JSON.stringify(await planNow()) !== JSON.stringify(plan); steps++) {
    expect(steps).toBeLessThan(40);
    const from = JSON.stringify((await look()).plans);
    await page.getByRole('button', { name: /^Undo: / }).click();
    await vi.waitFor(async () => expect(JSON.stringify((await look()).plans)).not.toBe(from), SOON);
    await page.locator('progress').waitFor({ state: 'detached' });
  }
  await fitted(page);
}

/** Waits until the plan that stands is fitted, nothing of it refused, and gives the fit. */
async function fits(): Promise<Result> {
  await vi.waitFor(async () => {
    expect(await page.locator('progress').count()).toBe(0);
    expect(await page.locator('main [data-refused], [role=alert]').allInnerTexts()).toEqual([]);
    expect(JSON.stringify((await latest()).result?.plan)).toBe(JSON.stringify(await planNow()));
  }, SOON);
  return (await latest()).result as Result;
}

async function latest(): Promise<LatestFit> {
  const { planId } = (await look()).plans.at(-1) as ProjectLook['plans'][number];
  return readLatest(await ask('fit.latest', { planId }));
}

/** A step that failed leaves nothing behind for the next. */
async function backTo(place: 'Variance' | 'Fit' | 'Data', plan: Plan): Promise<void> {
  await page.keyboard.press('Escape');
  if (JSON.stringify(await planNow()) !== JSON.stringify(plan)) await undoTo(plan);
  await goTo(page, place);
}

/** What the fit says at a phrase where it refuses what is stated there. */
function refusedAt(at: string, sentence: RegExp): Promise<void> {
  return vi.waitFor(
    async () => expect(await page.locator(`main [data-refused="${at}"]`).first().innerText()).toMatch(sentence),
    SOON,
  );
}

/** A text as it is read: any white space as one blank. */
function plain(text: string): string {
  return text.replaceAll(/\s+/g, ' ').trim();
}

/** The table on the screen is one of the result, text by text. drawn: columns that the screen puts in by itself. */
function showsTable(within: Locator, table: Table | null, drawn: readonly number[] = []): Promise<void> {
  expect(table).not.toBeNull();
  return vi.waitFor(async () => {
    const rows = await within.locator('tbody tr:not(.below)').all();
    const shown = await Promise.all(rows.map((row) => row.locator('th, td').allInnerTexts()));
    const texts = shown.map((cells) => cells.filter((_, i) => !drawn.includes(i)).map(plain));
    expect(texts).toEqual(table?.rows.map((cells) => cells.map(({ text }) => plain(text))));
  }, SOON);
}

/** The head and the Variance screen tell the structure as it was fitted: the sentence, how cells go together, every parameter. */
async function showsStructure(result: Result): Promise<void> {
  const { plan, fit } = result;
  const said = statementPieces(plan, result)
    .map(({ text }) => text)
    .join('');
  const parameters = page.locator('[data-part=structure] [data-part=parameters] > li');
  await vi.waitFor(async () => {
    expect(plain(await page.locator('[data-part=statement] p').first().innerText())).toBe(plain(said));
    const main = plain(await page.locator('main').innerText());
    expect(main).toContain(plain(`${methodSentence(result)} ${independenceSentence(result)}`));
    const texts = (await parameters.allInnerTexts()).map(plain);
    for (const [i, one] of fit.variance.entries())
      expect(texts[i]).toContain(plain(parameterText(one, fit.inference.level)));
  }, SOON);
}

/** The Fit screen shows the result's coefficients, and names in its list every section that stands on it, in their order. */
async function showsFit(result: Result): Promise<void> {
  const { before } = await latest();
  await showsTable(page.locator('[data-part=coefficients]'), coefficientsTable(result, before), [3]);
  const listed = page.getByRole('navigation', { name: fitTexts.contents }).getByRole('button');
  const standing = await page
    .locator('main section[data-part]')
    .evaluateAll((all) => all.map((one) => one.getAttribute('data-part')));
  const names = standing.flatMap((part) => fitSections.filter((one) => one.part === part).map(({ name }) => name));
  expect((await listed.allInnerTexts()).map(plain)).toEqual(names);
}

/** No fault of the page as it stands, in light and in dark; picture: left of the dark page. */
async function faultless(picture: string | null = null): Promise<void> {
  for (const source of ['dark', 'light'] as const) {
    await opened.app.evaluate(({ nativeTheme }, theme) => {
      nativeTheme.themeSource = theme as 'light' | 'dark';
    }, source);
    expect(await axeFaults(page)).toEqual([]);
    expect(await layoutFaults(page)).toEqual([]);
    if (picture !== null && source === 'dark') await opened.picture(`${picture}-dark`);
  }
}

describe('the structure, part by part', () => {
  const parts = () => page.locator('[data-part=structure] .parts > li');
  const phrase = (line: number, text: string | RegExp) => parts().nth(line).locator('.governed', { hasText: text });
  let before: Plan;

  beforeAll(async () => {
    await goTo(page, 'Variance');
    before = await planNow();
  });

  afterEach(() => backTo('Variance', before));

  it('offers every sampling part of the contract, and fits a variance for each class', async () => {
    await phrase(0, /respondents/).click();
    const choices = await panel().innerText();
    for (const name of [
      'a variance for each class',
      'log-linear in columns',
      'the variance of a share',
      'a full covariance matrix',
    ])
      expect(choices).toContain(name);
    await opened.picture('contract-sampling');
    await panel().getByRole('button', { name: 'a variance for each class' }).click();
    await planHas({ variance: { parts: [{ kind: 'per-class', column: 'parish', perSize: false }] } });
    await showsStructure(await fits());
    await choose(phrase(0, 'parish'), 'year');
    await choose(phrase(0, 'whatever the size'), 'over the size of the cell');
    await planHas({ variance: { parts: [{ kind: 'per-class', column: 'year', perSize: true }] } });
    const result = await fits();
    expect(result.fit.variance.map(({ name }) => name)).toEqual(['phi: 2023', 'phi: 2024', 'phi: 2025']);
    await showsStructure(result);
    await opened.picture('contract-per-class');
    await faultless();
    await undoTo(before);
    expect(await page.getByRole('button', { name: 'Redo: the variance' }).count()).toBe(1);
  });

  it('takes terms of a log-linear variance, one after the other, and lets them go', async () => {
    await phrase(1, 'between cells').click();
    await panel().getByRole('button', { name: 'Take this part out' }).click();
    await choose(phrase(0, /respondents/), 'log-linear in columns');
    await phrase(0, 'log(carers)').click();
    await panel().getByLabel('Another term').selectOption('distance_km');
    await panel().getByLabel('Form').selectOption('log');
    await opened.picture('contract-log-linear');
    await panel().getByRole('button', { name: 'Add it' }).click();
    await planHas({
      variance: {
        parts: [{ kind: 'log-linear', terms: [{ transform: 'log' }, { column: 'distance_km', transform: 'log' }] }],
      },
    });
    const result = await fits();
    expect(result.fit.variance.filter(({ name }) => name.startsWith('gamma'))).toHaveLength(3);
    await showsStructure(result);
    await phrase(0, 'log(carers) and log(distance_km)').click();
    await panel().getByRole('button', { name: 'Take it out' }).first().click();
    await planHas({ variance: { parts: [{ kind: 'log-linear', terms: [{ column: 'distance_km' }] }] } });
    await phrase(0, 'log(distance_km)').click();
    expect(await panel().getByRole('button', { name: 'Take it out' }).isDisabled()).toBe(true);
    await page.keyboard.press('Escape');
    await undoTo(before);
  });

  it('correlates the cells of a part inside groups or along an order, and adds what groups share', async () => {
    await phrase(1, 'cells independent').click();
    await panel().getByLabel('fading along an order').check();
    await panel().getByLabel('In the order of').selectOption('year');
    await panel().getByRole('checkbox', { name: 'parish', exact: true }).check();
    await opened.picture('contract-correlation');
    await panel().getByRole('button', { name: 'Keep' }).click();
    await planHas({
      variance: { parts: [{}, { kind: 'between', correlation: { kind: 'serial', by: ['parish'], order: 'year' } }] },
    });
    await showsStructure(await fits());
    await phrase(1, /fading along year/).click();
    await panel().getByLabel('equally inside groups').check();
    await panel().getByRole('button', { name: 'Keep' }).click();
    await planHas({ variance: { parts: [{}, { correlation: { kind: 'exchangeable', by: ['parish'] } }] } });
    const result = await fits();
    expect(result.fit.variance.map(({ name }) => name)).toContain('rho: between');
    await showsStructure(result);
    await page.locator('[data-part=covariance]').waitFor();
    await opened.picture('contract-exchangeable');
    await faultless('contract-exchangeable');
    await goTo(page, 'Fit');
    await showsFit(result);
    await faultless();
    await goTo(page, 'Variance');
    await undoTo(before);
    await chooseColumns(page.locator('[data-part=structure] .governed', { hasText: 'add a part' }), ['year']);
    await planHas({ variance: { parts: [{}, {}, { kind: 'shared', by: ['year'] }] } });
    await showsStructure(await fits());
    await chooseColumns(phrase(2, 'cells of the same year'), ['parish']);
    await planHas({ variance: { parts: [{}, {}, { kind: 'shared', by: ['parish'] }] } });
    await showsStructure(await fits());
    await opened.picture('contract-shared');
    await faultless();
    await choose(
      page.locator('[data-part=statement] .governed', { hasText: 'sharing a shock' }),
      /independent of one another/,
    );
    await planHas({ variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }] } });
    await undoTo(before);
  });

  it('says in the head how cells go together, and changes it there', async () => {
    const statement = page.locator('[data-part=statement]');
    await statement.locator('.governed', { hasText: 'independent of one another' }).click();
    await opened.picture('contract-together');
    await faultless();
    await panel().getByLabel('equally inside groups').check();
    await panel().locator('form').first().getByRole('checkbox', { name: 'parish', exact: true }).check();
    await panel().locator('form').first().getByRole('button', { name: 'Keep' }).click();
    await planHas({ variance: { parts: [{}, { correlation: { kind: 'exchangeable', by: ['parish'] } }] } });
    await showsStructure(await fits());
    await statement.locator('.governed', { hasText: 'correlated in what sets them apart' }).click();
    await panel().getByLabel('cells independent').check();
    await panel().locator('form').first().getByRole('button', { name: 'Keep' }).click();
    await planHas({ variance: { parts: [{}, { correlation: null }] } });
    await chooseColumns(
      statement.locator('.governed', { hasText: 'independent of one another' }),
      ['year'],
      panel().locator('form').last(),
    );
    await planHas({ variance: { parts: [{}, {}, { kind: 'shared', by: ['year'] }] } });
    await showsStructure(await fits());
    await chooseColumns(
      statement.locator('.governed', { hasText: 'shared by all cells of the same year' }),
      ['parish'],
      panel().locator('form').last(),
    );
    await planHas({ variance: { parts: [{}, {}, { kind: 'shared', by: ['parish'] }] } });
    await undoTo(before);
  });

  it('proposes from the answers what groups share or what fades along an order, and fits it', async () => {
    const asked = page.locator('[data-part=three-questions]');
    await choose(asked.locator('li').nth(2).locator('.governed'), 'Yes, cells of the same parish.');
    await opened.picture('contract-proposal');
    await asked.getByRole('button', { name: 'State this structure' }).click();
    await planHas({
      variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }, { kind: 'shared', by: ['parish'] }] },
    });
    await showsStructure(await fits());
    await choose(asked.locator('li').nth(2).locator('.governed'), 'Yes, neighbours along year inside the same parish.');
    await asked.getByRole('button', { name: 'State this structure' }).click();
    await planHas({
      variance: { parts: [{ kind: 'per-size' }, { correlation: { kind: 'serial', by: ['parish'], order: 'year' } }] },
    });
    await showsStructure(await fits());
    // Names are no numbers: cells do not stand in their order.
    await asked.locator('li').nth(2).locator('.governed').click();
    expect(await panel().innerText()).not.toContain('along parish');
    await page.keyboard.press('Escape');
    await undoTo(before);
  });

  it('sets parameters, that of a class by its name', async () => {
    await choose(phrase(0, /respondents/), 'a variance for each class');
    const settings = page.locator('[data-part=structure] [data-part=parameters]');
    const { fit } = await fits();
    expect(fit.variance[0]?.name).toBe('phi: Arlow Green');
    await settings.locator('.governed').first().click();
    await panel().getByLabel('Set it to').fill('3.5');
    await panel().getByRole('button', { name: 'Set', exact: true }).click();
    await planHas({ variance: { fixed: { 'phi: Arlow Green': 3.5 } } });
    const set = await fits();
    expect(set.fit.variance[0]).toMatchObject({ estimate: 3.5, fixed: true });
    await showsStructure(set);
    await settings.locator('.governed').first().click();
    await panel().getByRole('button', { name: 'Estimate it again' }).click();
    await vi.waitFor(async () => expect((await planNow()).variance.fixed).toEqual({}), SOON);
    await undoTo(before);
  });

  it('takes a matrix from a file, which is kept in the project, under a name of its own', async () => {
    const rows = readFileSync(resolve('resources/demo/care.csv'), 'utf8').trim().split('\n').slice(1);
    const labels = rows.map((row) => row.split(',').slice(0, 2).join(' · '));
    const covariance = (one: string, other: string) =>
      one === other ? 0.5 : one.split(' · ')[0] === other.split(' · ')[0] ? 0.2 : 0;
    const table = (of: readonly string[]) =>
      [['', ...of], ...of.map((one) => [one, ...of.map((other) => covariance(one, other))])]
        .map((cells) => cells.join(','))
        .join('\n');
    // The name is that of the data: neither file may take the other's place.
    const file = join(folder, 'care.csv');
    writeFileSync(file, table(labels.slice(0, 2)));
    await opened.choose(file);
    await phrase(0, /respondents/).click();
    await panel().getByRole('button', { name: 'a full covariance matrix' }).click();
    await planHas({
      variance: { parts: [{ kind: 'matrix', file: 'care (2).csv', scale: 'fixed', freedom: null }, {}] },
    });
    const { inputs } = (await look()).plans.at(-1) as ProjectLook['plans'][number];
    expect(inputs.map(({ name }) => name).sort()).toEqual(['care (2).csv', 'care.csv', 'places.csv']);
    await refusedAt('/variance/parts/0', /care \(2\)\.csv/);
    await opened.picture('contract-matrix-lacking');
    writeFileSync(file, table(labels));
    await phrase(0, 'care (2).csv').click();
    await panel().getByRole('button', { name: 'Choose a file …' }).click();
    await showsStructure(await fits());
    await opened.picture('contract-matrix');
    await faultless();
    await phrase(0, 'taken as exact').click();
    await panel().getByLabel('So many degrees of freedom each:').fill('80');
    await panel().getByRole('button', { name: 'Keep' }).first().click();
    await choose(phrase(0, 'taken as it stands'), 'right up to a common factor');
    await planHas({ variance: { parts: [{ kind: 'matrix', scale: 'free', freedom: 80 }, {}] } });
    await showsStructure(await fits());
    await undoTo(before);
  });
});

describe('a structure of one’s own', () => {
  it('is put together beside the stated one by the same control, and changed there', async () => {
    await goTo(page, 'Variance');
    const before = await planNow();
    await choose(
      page.locator('[data-part=candidates] .governed', { hasText: 'Put another structure beside' }),
      'a structure of your own',
    );
    const rival = page.locator('[data-part=rival]');
    await choose(rival.locator('.parts .governed').first(), /falling as a power of size/);
    await opened.picture('contract-rival');
    await faultless();
    await rival.getByRole('button', { name: 'Put it beside' }).click();
    const own = { parts: [{ kind: 'size-power', exponent: 'estimate' }, { kind: 'between' }], fixed: {} };
    await planHas({ beside: [...before.beside, own] });
    await fitted(page);
    await page
      .locator('[data-part=candidates] tbody tr')
      .nth(before.beside.length + 1)
      .waitFor();
    await page.locator('[data-part=candidates] tbody .governed').last().click();
    await panel().getByRole('button', { name: 'Change its parts' }).click();
    await choose(rival.locator('.governed', { hasText: 'to a power estimated here' }), 'Let the data say');
    await rival.locator('.parts .governed', { hasText: 'between cells' }).click();
    await panel().getByRole('button', { name: 'Take this part out' }).click();
    await rival.getByRole('button', { name: 'Keep it so' }).click();
    await planHas({ beside: [...before.beside, { parts: [{ kind: 'size-power', exponent: 'estimate' }] }] });
    await undoTo(before);
  });

  it('gives the weights, put together under the sentence that says so', async () => {
    await goTo(page, 'Fit');
    const before = await planNow();
    const found = page.locator('[data-part=how-found]');
    await choose(
      found.locator('.governed', { hasText: 'weights by the structure' }),
      /^◇ a structure of its own|a structure of its own/,
    );
    await planHas({ target: { parts: [{ kind: 'per-size' }] } });
    await fitted(page);
    const target = page.locator('[data-part=target]');
    await target.locator('.governed', { hasText: 'add a part' }).click();
    await panel().getByRole('button', { name: 'between cells, beyond sampling' }).click();
    await planHas({ target: { parts: [{ kind: 'per-size' }, { kind: 'between' }] } });
    await fitted(page);
    await opened.picture('contract-target');
    await faultless();
    await page.getByRole('button', { name: 'Undo: what the weights aim at' }).waitFor();
    await undoTo(before);
  });
});

describe('errors and tests', () => {
  const found = () => page.locator('[data-part=how-found]');
  const phrase = (text: string | RegExp) => found().locator('.governed', { hasText: text });
  let before: Plan;

  /** How the errors were found, told beside the coefficients that have them. */
  async function showsErrors(result: Result): Promise<void> {
    await showsFit(result);
    const told = plain(await page.locator('[data-part=errors]').innerText());
    expect(inferenceSentences(result).length).toBeGreaterThan(0);
    for (const sentence of inferenceSentences(result)) expect(told).toContain(plain(sentence));
  }

  beforeAll(async () => {
    await goTo(page, 'Fit');
    before = await planNow();
  });

  afterEach(() => backTo('Fit', before));

  it('sums residuals by clusters, one way or two, with the corrections that go with each', async () => {
    await choose(phrase('the stated structure'), 'residuals summed by clusters');
    await planHas({ inference: { kind: 'clustered', by: ['parish'], alsoBy: null, correction: 'CR2' } });
    await showsErrors(await fits());
    await choose(phrase('correction CR2'), 'CR3');
    await planHas({ inference: { correction: 'CR3' } });
    await showsErrors(await fits());
    await chooseColumns(phrase('one way alone'), ['year']);
    await planHas({ inference: { by: ['parish'], alsoBy: ['year'], correction: 'CR1' } });
    await showsErrors(await fits());
    await phrase('correction CR1').click();
    expect(await panel().getByRole('button', { name: 'CR2' }).isDisabled()).toBe(true);
    await opened.picture('contract-clustered');
    await page.keyboard.press('Escape');
    await faultless();
    await undoTo(before);
  });

  it('draws the signs of clusters anew, so many times, from a seed', async () => {
    await choose(phrase('the stated structure'), 'signs of clusters drawn anew');
    for (const [text, label, value] of [
      ['draws', 'How many draws', '499'],
      ['seed 1', 'The seed of the draws', '7'],
    ] as const) {
      await phrase(text).click();
      await panel().getByLabel(label).fill(value);
      await panel().getByRole('button', { name: 'Keep' }).click();
    }
    await planHas({ inference: { kind: 'wild', by: ['parish'], replications: 499, seed: 7 } });
    const result = await fits();
    await showsErrors(result);
    await showsTable(page.locator('[data-part=errors]'), wildTable(result));
    await page.locator('[data-part=errors]').scrollIntoViewIfNeeded();
    await opened.picture('contract-wild');
    await faultless('contract-wild');
    await undoTo(before);
  });

  it('corrects robust errors by any rule, and takes Kenward-Roger where the method goes with it', async () => {
    await choose(phrase('the stated structure'), /squared residuals/);
    await choose(phrase('correction HC3'), 'HC4');
    await planHas({ inference: { kind: 'robust', correction: 'HC4' } });
    await fitted(page);
    await undoTo(before);
    await choose(phrase('the stated structure'), /Kenward-Roger/);
    await planHas({ inference: { kind: 'kenward-roger' } });
    await showsErrors(await fits());
    await undoTo(before);
  });

  it('says which columns the tests look at, and takes a list of neighbours from a file', async () => {
    const tests = page.locator('[data-part=tests]');
    await chooseColumns(tests.locator('.governed').first(), ['distance_km', 'places_per_1000']);
    await planHas({ tests: { columns: ['distance_km', 'places_per_1000'], whiteColumns: null, neighbours: null } });
    await chooseColumns(tests.locator('.governed').nth(1), ['distance_km']);
    await planHas({ tests: { whiteColumns: ['distance_km'] } });
    const file = join(folder, 'borders.csv');
    writeFileSync(file, 'one,other\nArlow Green · 2023,Arlow Green · 2024\nBrackwater · 2023,Brackwater · 2024\n');
    await opened.choose(file);
    await tests.locator('.governed', { hasText: 'not named' }).click();
    await panel().getByRole('button', { name: 'Choose a file …' }).click();
    await planHas({ tests: { neighbours: 'borders.csv' } });
    await fitted(page);
    await page.locator('[data-part=evidence]', { hasText: 'borders.csv' }).waitFor();
    await tests.scrollIntoViewIfNeeded();
    await opened.picture('contract-tests');
    await faultless();
    await page.getByRole('button', { name: 'Undo: what the tests look at' }).waitFor();
    await undoTo(before);
    expect((await planNow()).tests).toBeNull();
  });

  it('names what was undone: the smallest difference that matters; what it takes to find it is told', async () => {
    await page.locator('[data-term=distance_km] .governed').click();
    await panel().getByLabel('Smallest difference that matters').fill('0.4');
    await panel().getByRole('button', { name: 'Keep' }).click();
    await page.getByRole('button', { name: 'Undo: the smallest difference that matters' }).waitFor();
    const result = await fits();
    await showsFit(result);
    await showsTable(page.locator('[data-part=takes]'), takesTable(result));
    await showsTable(page.locator('[data-part=together]'), togetherTable(result));
    await page
      .getByRole('navigation', { name: fitTexts.contents })
      .getByRole('button', { name: 'What it takes' })
      .click();
    await opened.picture('contract-takes');
    await faultless('contract-takes');
    await undoTo(before);
  });
});

describe('data that are known within limits', () => {
  const row = (column: string) => page.getByRole('row', { name: new RegExp(`^${column}`) });
  let before: Plan;

  beforeAll(async () => {
    await goTo(page, 'Data');
    before = await planNow();
  });

  it('are said to be rounded, or suppressed between two ends', async () => {
    await row('distance_km').locator('.governed', { hasText: 'values as they stand' }).click();
    await panel().getByLabel('Rounded to a base of').check();
    await panel().getByRole('spinbutton', { name: 'Rounded to a base of' }).fill('0.1');
    await panel().getByRole('button', { name: 'Keep' }).click();
    await planHas({ data: { limits: { distance_km: { rounding: 0.1 } } } });
    const result = await fits();
    await goTo(page, 'Fit');
    await showsFit(result);
    await showsTable(page.locator('[data-part=bounds]'), boundsTable(result));
    const bounds = plain(await page.locator('[data-part=bounds]').innerText());
    expect(
      result.bounds.some((bound, i) =>
        bounds.includes(
          plain(boundSentence(bound, result.fit.coefficients[i] as Result['fit']['coefficients'][number], result)),
        ),
      ),
    ).toBe(true);
    await page.locator('[data-part=bounds]').scrollIntoViewIfNeeded();
    await opened.picture('contract-bounds');
    await faultless('contract-bounds');
    await goTo(page, 'Data');
    await row('mean_hours').locator('.governed', { hasText: 'values as they stand' }).click();
    await panel().getByLabel('Suppressed values lie between').check();
    await panel().getByRole('spinbutton', { name: 'and' }).fill('20');
    await opened.picture('contract-limits');
    await panel().getByRole('button', { name: 'Keep' }).click();
    await planHas({ data: { limits: { mean_hours: { suppressed: [0, 20] } } } });
    await page.getByRole('button', { name: 'Undo: what is known of rounded or suppressed values' }).waitFor();
    await faultless();
    await undoTo(before);
  });

  it('have sizes known to within so many, and a deviation inside the cell', async () => {
    await row('carers').locator('.governed', { hasText: 'taken as exact' }).click();
    await panel().getByLabel('Known to within so many').fill('2');
    await panel().getByRole('button', { name: 'Set' }).click();
    await planHas({ data: { sizeWithin: 2 } });
    const within = await fits();
    await goTo(page, 'Fit');
    await showsFit(within);
    await goTo(page, 'Data');
    await choose(row('older_percent').locator('.governed').first(), 'the deviation inside the cell');
    await planHas({ roles: { withinSd: 'older_percent' } });
    // A deviation inside cells explains nothing: the term goes, and with it the question that asked for it.
    await page.getByText('With it changed the questions').waitFor();
    const result = await fits();
    await goTo(page, 'Fit');
    await showsFit(result);
    await showsTable(page.locator('[data-part=individuals]'), individualTable(result));
    const told = plain(await page.locator('[data-part=individuals]').innerText());
    for (const sentence of individualSentences(result)) expect(told).toContain(plain(sentence));
    await page.locator('[data-part=individuals]').scrollIntoViewIfNeeded();
    await opened.picture('contract-individuals');
    await faultless('contract-individuals');
    await goTo(page, 'Data');
    await undoTo(before);
  });

  it('are shares on the logit scale, with what is added to those of none and all', async () => {
    await page.getByRole('button', { name: 'Paste a table' }).click();
    await page.getByLabel('The table as text').fill('town,answered,share\nA,20,0.1\nB,40,0.5\nC,30,0.9\nD,25,0.4\n');
    await page.getByRole('button', { name: 'Take it in' }).click();
    await page.getByRole('button', { name: 'A new plan from it' }).click();
    await row('answered').locator('.governed').first().click();
    await panel().getByRole('button', { name: 'the group size', exact: true }).click();
    await choose(row('share').locator('.governed', { hasText: 'fitted as it stands' }), 'on the logit scale');
    await opened.picture('contract-share');
    await page.getByRole('button', { name: 'Accept these data' }).click();
    await page.getByRole('button', { name: 'State this structure' }).click();
    await planHas({ outcomeScale: 'logit', addedHalf: 'extreme-cells' });
    // Equal weights stand beside it, so that it can be priced.
    expect((await planNow()).beside).toEqual(['constant']);
    await goTo(page, 'Fit');
    await showsFit(await fits());
    await choose(
      page.locator('[data-part=model] .governed', { hasText: 'half a case added to cells' }),
      'half a case added to every cell',
    );
    await planHas({ addedHalf: 'all-cells' });
    await page.getByRole('button', { name: 'Undo: the scale of the outcome' }).waitFor();
    await opened.picture('contract-logit');
    await faultless('contract-logit');
  });

  it('leave no complaint on the console', () => {
    expect(opened.complaints).toEqual([]);
  });
});
