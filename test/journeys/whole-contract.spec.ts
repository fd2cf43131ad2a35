// Controls for every key of the plan that states a structure, errors, tests and limits: what is chosen stands in the plan, what this version does
// not fit is said at its phrase, and all of it can be undone by name.
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { ProjectLook } from '@core/protocol/bridge';
import { isOffered, isOfferedCorrelation, isOfferedInference, isOfferedKey } from '@core/protocol/offered-parts';
import type { Plan } from '@core/protocol/plan';
import type { Locator, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { axeFaults, layoutFaults } from './faults.ts';
import { fitted, goTo, type Opened, openDemo, openProgram } from './opened.ts';

const SOON = { timeout: 20_000, interval: 100 };
const LATER = 'this version does not fit it yet';

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

interface Answer {
  readonly ok: boolean;
  readonly value: ProjectLook;
}

/** The project as main has it. */
async function look(): Promise<ProjectLook> {
  const answer = await page.evaluate(
    () =>
      (
        window as unknown as { steelyard: { ask: (question: string, payload: object) => Promise<unknown> } }
      ).steelyard.ask('project.look', {}) as Promise<unknown>,
  );
  return (answer as Answer).value;
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
  for (let steps = 0; JSON.stringify(await planNow()) !== JSON.stringify(plan); steps++) {
    expect(steps).toBeLessThan(40);
    await page.getByRole('button', { name: /^Undo: / }).click();
    await page.locator('progress').waitFor({ state: 'detached' });
  }
  await fitted(page);
}

/** What the fit says at a phrase: that it lacks what is stated there, or nothing. */
function refusedAt(at: string, isThere: boolean): Promise<void> {
  const said = page.locator(`main [data-refused="${at}"]`);
  return vi.waitFor(async () => {
    await page.locator('progress').waitFor({ state: 'detached' });
    if (isThere) expect(await said.count()).toBe(0);
    else expect((await said.first().innerText()).trim()).toBe(LATER);
  }, SOON);
}

/** No fault of the page as it stands, in light and in dark. */
async function faultless(): Promise<void> {
  for (const source of ['dark', 'light'] as const) {
    await opened.app.evaluate(({ nativeTheme }, theme) => {
      nativeTheme.themeSource = theme as 'light' | 'dark';
    }, source);
    expect(await axeFaults(page)).toEqual([]);
    expect(await layoutFaults(page)).toEqual([]);
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

  it('offers every sampling part of the contract; what this version lacks can be stated, and is refused at its phrase', async () => {
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
    await refusedAt('/variance/parts/0', isOffered('per-class'));
    await choose(phrase(0, 'parish'), 'year');
    await choose(phrase(0, 'whatever the size'), 'over the size of the cell');
    await planHas({ variance: { parts: [{ kind: 'per-class', column: 'year', perSize: true }] } });
    await opened.picture('contract-per-class');
    await faultless();
    await undoTo(before);
    expect(await page.getByRole('button', { name: 'Redo: the variance' }).count()).toBe(1);
  });

  it('takes terms of a log-linear variance, one after the other, and lets them go', async () => {
    await choose(phrase(0, /respondents/), 'log-linear in columns');
    await phrase(0, 'log(carers)').click();
    await panel().getByLabel('Another term').selectOption('distance_km');
    await panel().getByLabel('Form').selectOption('log');
    await opened.picture('contract-log-linear');
    await panel().getByRole('button', { name: 'Add it' }).click();
    await planHas({
      variance: {
        parts: [{ kind: 'log-linear', terms: [{ transform: 'log' }, { column: 'distance_km', transform: 'log' }] }, {}],
      },
    });
    await refusedAt('/variance/parts/0', isOffered('log-linear'));
    await phrase(0, 'log(carers) and log(distance_km)').click();
    await panel().getByRole('button', { name: 'Take it out' }).first().click();
    await planHas({ variance: { parts: [{ kind: 'log-linear', terms: [{ column: 'distance_km' }] }, {}] } });
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
    await refusedAt('/variance/parts/1', isOfferedCorrelation('serial'));
    await phrase(1, /fading along year/).click();
    await panel().getByLabel('equally inside groups').check();
    await panel().getByRole('button', { name: 'Keep' }).click();
    await planHas({ variance: { parts: [{}, { correlation: { kind: 'exchangeable', by: ['parish'] } }] } });
    await page.locator('[data-part=statement]', { hasText: 'Cells are taken as correlated' }).waitFor();
    await undoTo(before);
    await chooseColumns(page.locator('[data-part=structure] .governed', { hasText: 'add a part' }), ['year']);
    await planHas({ variance: { parts: [{}, {}, { kind: 'shared', by: ['year'] }] } });
    await refusedAt('/variance/parts/2', isOffered('shared'));
    await chooseColumns(phrase(2, 'cells of the same year'), ['parish', 'year']);
    await planHas({ variance: { parts: [{}, {}, { kind: 'shared', by: ['parish', 'year'] }] } });
    await opened.picture('contract-shared');
    await choose(
      page.locator('[data-part=statement] .governed', { hasText: 'sharing what' }),
      /independent of one another/,
    );
    await planHas({ variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }] } });
    await undoTo(before);
  });

  it('sets parameters before any fit knows them, a class by its name', async () => {
    await choose(phrase(0, /respondents/), 'a variance for each class');
    await phrase(0, 'parish').waitFor();
    const settings = page.locator('[data-part=structure] [data-part=parameters]');
    if (!isOffered('per-class')) {
      await settings.getByRole('button', { name: 'set one of a class' }).click();
      await panel().getByLabel('Of which class').fill('Arlow Green');
      await panel().getByLabel('Set it to').fill('3.5');
      await panel().getByRole('button', { name: 'Set', exact: true }).click();
      await planHas({ variance: { fixed: { 'phi: Arlow Green': 3.5 } } });
      await settings.getByRole('button', { name: 'set to 3.5' }).click();
      await panel().getByRole('button', { name: 'Estimate it again' }).click();
      await vi.waitFor(async () => expect((await planNow()).variance.fixed).toEqual({}), SOON);
    }
    await undoTo(before);
  });

  it('takes a matrix from a file, which is kept in the project, under a name of its own', async () => {
    const labels = ['Arlow Green · 2023', 'Brackwater · 2023'];
    // The name is that of the data: neither file may take the other's place.
    const file = join(folder, 'care.csv');
    writeFileSync(
      file,
      `,${labels.join(',')}\n${labels.map((label, i) => `${label},${i === 0 ? '1,0' : '0,1'}`).join('\n')}\n`,
    );
    await opened.choose(file);
    await phrase(0, /respondents/).click();
    await panel().getByRole('button', { name: 'a full covariance matrix' }).click();
    await planHas({
      variance: { parts: [{ kind: 'matrix', file: 'care (2).csv', scale: 'fixed', freedom: null }, {}] },
    });
    const { inputs } = (await look()).plans.at(-1) as ProjectLook['plans'][number];
    expect(inputs.map(({ name }) => name).sort()).toEqual(['care (2).csv', 'care.csv', 'places.csv']);
    await page.locator('main [data-refused="/variance/parts/0"]').first().waitFor();
    await opened.picture('contract-matrix');
    await phrase(0, 'taken as exact').click();
    await panel().getByLabel('So many degrees of freedom each:').fill('23');
    await panel().getByRole('button', { name: 'Keep' }).first().click();
    await choose(phrase(0, 'taken as it stands'), 'right up to a common factor');
    await planHas({ variance: { parts: [{ kind: 'matrix', scale: 'free', freedom: 23 }, {}] } });
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

  beforeAll(async () => {
    await goTo(page, 'Fit');
    before = await planNow();
  });

  it('sums residuals by clusters, one way or two, with the corrections that go with each', async () => {
    await choose(phrase('the stated structure'), 'residuals summed by clusters');
    await planHas({ inference: { kind: 'clustered', by: ['parish'], alsoBy: null, correction: 'CR2' } });
    await refusedAt('/inference', isOfferedInference('clustered'));
    await choose(phrase('correction CR2'), 'CR3');
    await planHas({ inference: { correction: 'CR3' } });
    await chooseColumns(phrase('one way alone'), ['year']);
    await planHas({ inference: { by: ['parish'], alsoBy: ['year'], correction: 'CR1' } });
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
    await refusedAt('/inference', isOfferedInference('wild'));
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
    await refusedAt('/inference', isOfferedInference('kenward-roger'));
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

  it('names what was undone: the smallest difference that matters', async () => {
    await page.locator('[data-term=distance_km] .governed').click();
    await panel().getByLabel('Smallest difference that matters').fill('0.4');
    await panel().getByRole('button', { name: 'Keep' }).click();
    await page.getByRole('button', { name: 'Undo: the smallest difference that matters' }).waitFor();
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
    await refusedAt('/data/limits', isOfferedKey('limits'));
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
    await refusedAt('/data/sizeWithin', isOfferedKey('sizeWithin'));
    await choose(row('older_percent').locator('.governed').first(), 'the deviation inside the cell');
    await planHas({ roles: { withinSd: 'older_percent' } });
    await refusedAt('/roles/withinSd', isOfferedKey('withinSd'));
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
    await refusedAt('/outcomeScale', isOfferedKey('logit'));
    await choose(
      page.locator('[data-part=model] .governed', { hasText: 'half a case added to cells' }),
      'half a case added to every cell',
    );
    await planHas({ addedHalf: 'all-cells' });
    await page.getByRole('button', { name: 'Undo: the scale of the outcome' }).waitFor();
    await opened.picture('contract-logit');
    await faultless();
  });

  it('leave no complaint on the console', () => {
    expect(opened.complaints).toEqual([]);
  });
});
