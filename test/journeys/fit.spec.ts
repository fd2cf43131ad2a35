import { spawnSync } from 'node:child_process';
import { copyFileSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { Locator, Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { fitted, goTo, type Opened, openDemo, openProgram } from './opened.ts';

/** What of a result a journey compares with the screen. */
interface Found {
  readonly fit: {
    readonly coefficients: readonly {
      readonly term: string;
      readonly estimate: number;
      readonly low: number;
      readonly high: number;
      readonly se: number;
      readonly ratio: number;
      readonly p: number;
    }[];
    readonly restrictedLogLikelihood: number;
  };
  readonly square: readonly {
    readonly truth: number;
    readonly weighting: number;
    readonly term: string;
    readonly se: number;
  }[];
  readonly beside: readonly {
    readonly restrictedLogLikelihood: number;
    readonly price: readonly {
      readonly term: string;
      readonly claimedSe: number;
      readonly actualSe: number;
      readonly cost: number;
    }[];
  }[];
  readonly questions: readonly { readonly answer: Readonly<Record<string, number>> }[];
}

/** How long a refit may take to be shown. */
const SOON = { timeout: 20_000, interval: 100 };

const demo = resolve('resources/demo');
let folder: string;

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'steelyard-fit-'));
  for (const file of ['care.csv', 'places.csv']) copyFileSync(join(demo, file), join(folder, file));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** The result.json that the command line writes for the demo's plan with some of its keys changed. */
function run(change: object = {}): Found {
  return runPlan({ ...(JSON.parse(readFileSync(join(demo, 'plan.json'), 'utf8')) as object), ...change });
}

function runPlan(plan: object): Found {
  writeFileSync(join(folder, 'plan.json'), JSON.stringify(plan));
  const out = join(folder, 'out');
  const { status, stderr } = spawnSync(
    process.execPath,
    [resolve('out/main/command.js'), 'run', join(folder, 'plan.json'), '--out', out, '--only', 'result'],
    { encoding: 'utf8' },
  );
  if (status !== 0) throw new Error(stderr);
  return JSON.parse(readFileSync(join(out, 'result.json'), 'utf8')) as Found;
}

/** A number as the screen writes it, read back to plain digits. */
function plain(text: string): string {
  return text.trim().replaceAll('\u2212', '-').replaceAll('\u202f', '').replace(/^\+/, '');
}

/** The text on the screen is the result's number, rounded to the digits that the screen shows. */
function agrees(text: string, value: number): void {
  const shown = plain(text);
  expect(shown).toMatch(/^-?\d+(\.\d+)?$/);
  expect(value.toFixed(shown.split('.')[1]?.length ?? 0)).toBe(shown);
}

/** The coefficients on the screen are those of a result, as soon as the fit under way is shown. */
function agreesWith(page: Page, found: Found): Promise<void> {
  return vi.waitFor(() => agreeNow(page, found), SOON);
}

async function agreeNow(page: Page, found: Found): Promise<void> {
  const rows = page.locator('[data-part=coefficients] tr[data-term]');
  expect(await rows.count()).toBe(found.fit.coefficients.length);
  for (const [i, one] of found.fit.coefficients.entries()) {
    const row = rows.nth(i);
    expect(await row.getAttribute('data-term')).toBe(one.term);
    const texts = await row.locator('th, td').allInnerTexts();
    const [name, estimate, interval, , error, reference, ratio, p] = texts as string[];
    expect(name?.trim()).toBe(one.term);
    agrees(estimate as string, one.estimate);
    const [low, high] = (interval as string).split(' to ') as [string, string];
    agrees(low, one.low);
    agrees(high, one.high);
    agrees(error as string, one.se);
    expect(reference).toMatch(/^(t on \d+|normal)/);
    agrees(ratio as string, one.ratio);
    if (one.p < 0.001) expect(p?.trim()).toBe('< 0.001');
    else agrees(p as string, one.p);
  }
}

/** Opens a phrase's choices and takes one. */
async function choose(page: Page, phrase: Locator, choice: string | RegExp): Promise<void> {
  await phrase.click();
  await page.locator('.governing').getByRole('button', { name: choice }).first().click();
}

let opened: Opened;
let page: Page;

beforeEach(async () => {
  opened = await openProgram();
  page = opened.page;
  await openDemo(opened);
});
afterEach(async () => {
  await opened.app.close();
  expect(opened.complaints).toEqual([]);
});

describe('the fit of the demo', () => {
  it('shows coefficients, prices and answers that are those of result.json, text by text', async () => {
    const found = run();
    await goTo(page, 'Fit');
    await agreesWith(page, found);
    const term = 'places_per_1000';

    const square = page.locator('[data-part=price] table').nth(0).locator('tbody tr');
    for (const { truth, weighting, term: of, se } of found.square)
      if (of === term) agrees(await square.nth(truth).locator('td').nth(weighting).innerText(), se);

    const prices = page.locator('[data-part=price] table').nth(1).locator('tbody tr');
    for (const [i, { price }] of found.beside.entries()) {
      const own = price.find((one) => one.term === term);
      if (own === undefined) throw new Error('the result prices no such term');
      const cells = await prices.nth(i).locator('td').allInnerTexts();
      agrees(cells[0] as string, own.claimedSe);
      agrees(cells[2] as string, own.actualSe);
      agrees((cells[3] as string).replace(/\u202f?%/, ''), 100 * own.cost);
    }
    await expect
      .poll(() => page.locator('[data-part=break-even]').innerText())
      .toContain(`equally precise for ${term}`);
    const joint = page.locator('[data-part=question]').first();
    const f = /F = ([\d.]+) on/.exec(await joint.innerText());
    agrees(f?.[1] ?? '', found.questions[0]?.answer['statistic'] as number);
    await opened.picture('fit-demo');
    await page.getByRole('button', { name: 'Price', exact: true }).click();
    await opened.picture('fit-price');
  });

  it('is refitted when the structure is changed, shows what moved, and comes back by undo under the action’s name', async () => {
    await goTo(page, 'Variance');
    const candidate = page.locator('[data-part=candidates]').getByRole('button', { name: 'per size', exact: true });
    await choose(page, candidate, 'State this one');
    await fitted(page);
    const parts = JSON.parse(readFileSync(join(demo, 'plan.json'), 'utf8')) as { beside: unknown[]; variance: unknown };
    const beside = parts.beside.map((rival) => (rival === 'per-size' ? parts.variance : rival));
    const changed = run({ variance: { parts: [{ kind: 'per-size' }] }, beside });
    await goTo(page, 'Fit');
    await agreesWith(page, changed);
    expect(await page.locator('[data-part=moved]').innerText()).toContain('places_per_1000');
    await expect
      .poll(() => page.locator('[data-term=places_per_1000] td').last().innerText(), SOON)
      .toMatch(/^was −0\.77$/);
    expect(await page.locator('[data-part=statement]').innerText()).toContain('nothing beyond it');
    await opened.picture('fit-restated');

    const undo = page.getByRole('button', { name: /^Undo:/ });
    expect(await undo.innerText()).toBe('Undo: the variance');
    await undo.click();
    await fitted(page);
    await agreesWith(page, run());
    await page.getByRole('button', { name: /^Redo:/ }).click();
    await fitted(page);
    await agreesWith(page, changed);
  });

  it('answers a question that is asked in the margin, as the command line does', async () => {
    await goTo(page, 'Fit');
    await page.getByRole('button', { name: 'Ask a question' }).click();
    const form = page.locator('.governing form');
    await form.getByLabel('What is asked').selectOption({ label: 'Does a combination of coefficients equal a value?' });
    await form.getByLabel('times distance_km').fill('1');
    await form.getByLabel('times older_percent').fill('-1');
    await form.getByLabel('Its name').fill('Distance less age');
    await form.getByRole('button', { name: 'Ask it' }).click();
    await fitted(page);
    const asked = page.locator('[data-part=question]', { hasText: 'Distance less age' });
    await asked.waitFor();
    const plan = JSON.parse(readFileSync(join(demo, 'plan.json'), 'utf8')) as { questions: unknown[] };
    const found = run({
      questions: [...plan.questions, { kind: 'combination', of: { distance_km: 1, older_percent: -1 } }],
    });
    const answer = found.questions.at(-1)?.answer as Record<string, number>;
    const told = /The answer is (\S+) /.exec(await asked.innerText());
    agrees(told?.[1] ?? '', answer['estimate'] as number);
    await asked.scrollIntoViewIfNeeded();
    await opened.picture('fit-question');
    await page.getByRole('button', { name: /^Undo: a question/ }).click();
    await fitted(page);
    await expect.poll(() => page.locator('[data-part=question]').count(), SOON).toBe(plan.questions.length);
  });

  it('takes terms in, out and in another form where the model stands as mathematics', async () => {
    await goTo(page, 'Fit');
    const model = page.locator('[data-part=model]');
    await model.getByRole('button', { name: 'distance_km' }).click();
    await page.locator('.governing').getByLabel('Form').selectOption({ label: 'its logarithm' });
    await page.locator('.governing').getByRole('button', { name: 'Change it' }).click();
    await fitted(page);
    const terms = [
      { column: 'places_per_1000' },
      { column: 'distance_km', transform: 'log' },
      { column: 'older_percent' },
    ];
    const plan = JSON.parse(readFileSync(join(demo, 'plan.json'), 'utf8')) as { questions: unknown[] };
    await agreesWith(page, run({ terms, questions: plan.questions.slice(1) }));
    expect(await model.getByRole('status').innerText()).toContain('questions');

    await model.getByRole('button', { name: 'add a term' }).click();
    const form = page.locator('.governing form');
    await form.getByLabel('Column').selectOption('year');
    await form.getByLabel('Form').selectOption({ label: 'a category, one coefficient a level' });
    await form.getByLabel('Its value in questions').fill('2024');
    await form.getByRole('button', { name: 'Add it' }).click();
    await fitted(page);
    await expect.poll(() => page.locator('tr[data-term]').allInnerTexts(), SOON).toHaveLength(6);
    expect(await page.locator('tr[data-term="year: 2025"]').count()).toBe(1);
    await expect.poll(() => page.locator('[data-part=question]').count(), SOON).toBe(2);
    await opened.picture('fit-terms');

    await model.getByRole('button', { name: 'year', exact: true }).click();
    await page.locator('.governing').getByRole('button', { name: 'Take it out' }).click();
    await fitted(page);
    await expect.poll(() => page.locator('tr[data-term]').count(), SOON).toBe(4);
  });

  it('is changed by keyboard alone: level, kind of error and back, the focus returning to the phrase', async () => {
    await goTo(page, 'Fit');
    const level = page.getByRole('button', { name: /^intervals at/ });
    await level.focus();
    await page.keyboard.press('Enter');
    await expect
      .poll(() => page.evaluate(() => (document.activeElement as HTMLInputElement).type), SOON)
      .toBe('number');
    await page.keyboard.press('Control+A');
    await page.keyboard.type('90');
    await page.keyboard.press('Enter');
    await fitted(page);
    await agreesWith(page, run({ inference: { kind: 'model', level: 0.9 } }));
    expect(await page.evaluate(() => document.activeElement?.textContent)).toContain('90');

    const error = page.getByRole('button', { name: 'the stated structure', exact: true });
    await error.focus();
    await page.keyboard.press('Enter');
    await page.keyboard.press('Tab');
    await page.keyboard.press('Enter');
    await fitted(page);
    await agreesWith(page, run({ inference: { kind: 'robust', correction: 'HC3', level: 0.9 } }));
    await page.keyboard.press('Control+Z');
    await fitted(page);
    await page.keyboard.press('Control+Z');
    await fitted(page);
    await agreesWith(page, run());
  });

  it('sets a second plan beside the first, a row a term and a mark a plan, and says in what they differ', async () => {
    await goTo(page, 'Fit');
    const plans = page.locator('[data-part=plans]');
    await plans.getByRole('button', { name: 'Add a plan like this one' }).click();
    await page.locator('.governing').getByLabel('Its name').fill('Without distance');
    await page.locator('.governing').getByRole('button', { name: 'Add it' }).click();
    await expect.poll(() => plans.locator('tbody tr').count(), SOON).toBe(6);
    await page.locator('[data-part=model]').getByRole('button', { name: 'distance_km' }).click();
    await page.locator('.governing').getByRole('button', { name: 'Take it out' }).click();
    const terms = [{ column: 'places_per_1000' }, { column: 'older_percent' }];
    const plan = JSON.parse(readFileSync(join(demo, 'plan.json'), 'utf8')) as { questions: unknown[] };
    const second = run({ terms, questions: plan.questions.slice(1) });
    await agreesWith(page, second);
    const row = plans.locator('tbody tr', { hasText: 'older_percent' });
    await expect.poll(() => row.locator('td').count(), SOON).toBe(2);
    const [one, other] = (await row.locator('td').allInnerTexts()).map((text) => text.split(' ')[0] as string);
    const estimate = (found: Found): number =>
      found.fit.coefficients.find(({ term }) => term === 'older_percent')?.estimate ?? Number.NaN;
    agrees(one as string, estimate(run()));
    agrees(other as string, estimate(second));
    expect(await plans.innerText()).toContain('They use the same cells.');
    expect(await plans.locator('svg').count()).toBe(3);
    await plans.scrollIntoViewIfNeeded();
    await opened.picture('fit-plans');
  });

  it('marks a cell in every figure as the arm is walked along', async () => {
    await goTo(page, 'Fit');
    await page.locator('[data-part=arm] [role=slider]').focus();
    for (let i = 0; i < 3; i++) await page.keyboard.press('ArrowRight');
    const label = /^(.+?):/.exec(await page.locator('[data-part=arm] output').innerText())?.[1] as string;
    await expect.poll(() => page.locator('[data-figure=beam] .ring').textContent(), SOON).toContain(label);
    await page.getByRole('button', { name: 'Beam', exact: true }).click();
    await opened.picture('fit-marked');
    await goTo(page, 'Variance');
    await expect.poll(() => page.locator('[data-figure=squared-residuals] .ring').textContent(), SOON).toContain(label);
    expect(await page.locator('[data-part=weights]').innerText()).toContain(label);
  });
});

describe('the variance of the demo', () => {
  it('is proposed from three questions with reasons, and changes nothing until it is taken', async () => {
    await goTo(page, 'Variance');
    const questions = page.locator('[data-part=three-questions]');
    const before = await page.locator('[data-part=statement]').innerText();
    expect(await questions.innerText()).toContain('This is the structure that stands.');
    await choose(page, questions.getByRole('button', { name: /^No: each cell stands alone/ }), /same parish/);
    expect(await questions.innerText()).toContain('A shock ω² that all cells of a group share');
    await choose(page, questions.getByRole('button', { name: /^Yes: places or years/ }), /^No: what is left/);
    expect(await page.locator('[data-part=statement]').innerText()).toBe(before);
    await opened.picture('variance-proposal');
    expect(await questions.innerText()).toContain('it is the sampling errors of a group that go together');
    await choose(page, questions.getByRole('button', { name: /^Yes, cells of the same parish/ }), /^No: each cell/);
    await questions.getByRole('button', { name: 'State this structure' }).click();
    await fitted(page);
    await expect.poll(() => page.locator('[data-part=statement]').innerText(), SOON).toContain('nothing beyond it');
    const own = page.locator('[data-part=candidates] tbody tr').first();
    expect(await own.innerText()).toMatch(/^per size\s/);
    expect(await own.innerText()).toContain('stated');
  });

  it('compares candidates by likelihood, says where they cannot be told apart, and preselects none', async () => {
    const found = run();
    await goTo(page, 'Variance');
    const rows = page.locator('[data-part=candidates] tbody tr');
    for (const [i, rival] of found.beside.entries()) {
      const [, difference, remark] = await rows
        .nth(i + 1)
        .locator('td')
        .allInnerTexts();
      const apart = rival.restrictedLogLikelihood - found.fit.restrictedLogLikelihood;
      agrees(difference as string, apart);
      expect(remark?.trim() ?? '').toBe(Math.abs(apart) < 2 ? 'not distinguishable' : '');
    }
    expect(
      await page.locator('[data-part=candidates] [aria-pressed=true], [data-part=candidates] :checked').count(),
    ).toBe(0);
    await rows.first().scrollIntoViewIfNeeded();
    await opened.picture('variance-candidates');
    await choose(page, page.getByRole('button', { name: 'Put another structure beside' }), /δ|estimated/);
    await fitted(page);
    await expect.poll(() => rows.count(), SOON).toBe(found.beside.length + 2);
  });

  it('shows parts whose columns are not at hand as barred, with the reason', async () => {
    await goTo(page, 'Variance');
    const structure = page.locator('[data-part=structure]');
    await structure.getByRole('button', { name: /one answer’s variance over/ }).click();
    expect(await page.locator('.governing').innerText()).toContain('needs a column that is the error of a cell');
    await opened.picture('variance-parts');
  });

  it('takes a parameter as set, and lets it be estimated again', async () => {
    await goTo(page, 'Variance');
    const parameters = page.locator('[data-part=parameters]');
    await parameters.getByRole('button').nth(1).click();
    await page.locator('.governing').getByLabel('Set it to').fill('2');
    await page.locator('.governing').getByRole('button', { name: 'Set', exact: true }).click();
    await fitted(page);
    await expect.poll(() => parameters.innerText(), SOON).toContain('2, set by the plan');
    const { variance } = JSON.parse(readFileSync(join(demo, 'plan.json'), 'utf8')) as { variance: { parts: unknown } };
    const beside = (JSON.parse(readFileSync(join(demo, 'plan.json'), 'utf8')) as { beside: unknown[] }).beside;
    const found = run({ variance: { ...variance, fixed: { tau2: 2 } }, beside: [variance, ...beside] });
    await goTo(page, 'Fit');
    await agreesWith(page, found);
    await goTo(page, 'Variance');
    await choose(page, parameters.getByRole('button').nth(1), 'Estimate it again');
    await fitted(page);
    await goTo(page, 'Fit');
    await agreesWith(page, { ...run(), square: [], beside: [], questions: [] });
  });

  it('draws one large figure at a time, each of its kinds', async () => {
    await goTo(page, 'Variance');
    const weights = page.locator('[data-part=weights]');
    const kinds: readonly (readonly [RegExp, string])[] = [
      [/^◇ weights against size/, 'weights'],
      [/^◇ concentration/, 'concentration'],
      [/^◇ whitened residuals against fitted/, 'whitened-residuals'],
      [/^◇ raw residuals/, 'raw-residuals'],
      [/^◇ whitened residuals against the normal/, 'normal-residuals'],
      [/^◇ squared residuals/, 'squared-residuals'],
    ];
    for (const [name, id] of kinds) {
      await weights.locator('.governed').first().click();
      await page.locator('.governing button', { hasText: name }).click();
      await page.locator(`[data-figure=${id}] svg`).waitFor();
      expect(await page.locator('[data-part=weights] [data-figure]').count()).toBe(1);
      await opened.picture(`variance-${id}`);
    }
  });

  it('puts the decision on record with its reason and author', async () => {
    await goTo(page, 'Variance');
    const decision = page.locator('[data-part=decision]');
    await decision.getByLabel('Reason').fill('Parishes differ in more than their centres');
    await decision.getByLabel('Your name').fill('R. Hale');
    await decision.getByRole('button', { name: 'Put the decision on record' }).click();
    const record = decision.locator('[data-part=decisions]');
    await expect.poll(() => record.innerText(), SOON).toContain('Parishes differ in more than their centres.');
    expect(await record.innerText()).toContain('Variance structure: per size + between');
    expect(await record.innerText()).toContain('R. Hale');
    await record.scrollIntoViewIfNeeded();
    await opened.picture('variance-decision');
  });

  it('keeps the answer covered on every screen until the structure is accepted by name, and the trail tells both', async () => {
    const secret = run().fit.coefficients.map(({ estimate }) => estimate.toFixed(2).replace('-', '−'));
    await goTo(page, 'Variance');
    const cover = page.locator('[data-part=cover]');
    await cover.getByLabel('Your name').fill('R. Hale');
    await cover.getByRole('button', { name: 'Cover the answer' }).click();
    await cover.getByRole('button', { name: 'Accept the structure and uncover the answer' }).waitFor();
    for (const place of ['Variance', 'Fit', 'Report'] as const) {
      await goTo(page, place);
      const text = await page.locator('main').innerText();
      for (const value of secret)
        expect(text, `${place} shows ${value}`).not.toMatch(new RegExp(`(^|\\s)${value}(\\s|\\d|$)`));
    }
    await goTo(page, 'Fit');
    expect(await page.locator('[data-part=coefficients]').innerText()).toContain(
      'covered until the structure is accepted',
    );
    expect(
      await page.locator('[data-figure=intervals-beside], [data-figure=beam], [data-figure=exponent-scan]').count(),
    ).toBe(0);
    await opened.picture('fit-covered');
    await goTo(page, 'Variance');
    const uncover = cover.getByRole('button', { name: 'Accept the structure and uncover the answer' });
    expect(await uncover.isDisabled()).toBe(true);
    await cover.getByLabel('Your name').fill('R. Hale');
    await uncover.click();
    await cover.getByRole('button', { name: 'Cover the answer' }).waitFor();
    await goTo(page, 'Fit');
    await agreesWith(page, run());
    await goTo(page, 'Trail');
    await expect.poll(() => page.locator('main').innerText(), SOON).toMatch(/uncovered/i);
    expect((await page.locator('main').innerText()).match(/covered/gi)?.length ?? 0).toBeGreaterThanOrEqual(2);
  });
});

/** Hand-made: estimates with errors of their own, for a plan that has no structure yet. */
const rents = `town,mean_rent,se,beds
Ashby,412,9.1,31
Bower,455,14.2,36
Cale,431,11.0,29
Dunn,498,8.7,44
Eyre,520,21.3,41
Fenby,476,12.6,38
Garton,563,16.4,52
Holt,541,10.2,47
Ince,589,18.8,49
`;

describe('a plan without a structure', () => {
  it('is fitted once one is stated, its errors as they stand; then by moments and Knapp-Hartung, as the command line does it', async () => {
    writeFileSync(join(folder, 'rents.csv'), rents);
    await opened.page
      .getByRole('button', { name: /Unpaid care/ })
      .first()
      .click();
    await page.getByRole('button', { name: 'Close the project' }).click();
    await opened.choose(join(folder, 'rents.steelyard'));
    await page.getByRole('button', { name: 'New project' }).click();
    await opened.choose(join(folder, 'rents.csv'));
    await page.getByRole('button', { name: 'Choose a file' }).click();
    await page.getByRole('heading', { name: 'What each column is' }).waitFor();
    await page.getByRole('button', { name: 'Accept these data' }).click();
    await page.locator('#page-title', { hasText: 'Variance' }).waitFor();
    const questions = page.locator('[data-part=three-questions]');
    expect(await questions.innerText()).toContain('It comes with an error of its own, taken as it stands.');
    await opened.picture('variance-unstated');
    await goTo(page, 'Fit');
    expect(await page.locator('main').innerText()).toContain('Nothing is fitted yet');
    await page.getByRole('link', { name: 'State it under Variance' }).click();
    await page.getByRole('button', { name: 'State it and put these beside it' }).click();
    await fitted(page);
    await page.locator('[data-part=candidates] tbody tr').nth(3).waitFor();
    await opened.picture('variance-stated');
    await goTo(page, 'Fit');
    const given = { kind: 'given', scale: 'fixed' };
    const plan = {
      format: 'steelyard-plan/1',
      data: { file: 'rents.csv' },
      roles: { label: ['town'], outcome: 'mean_rent', error: 'se' },
      terms: [{ column: 'beds' }],
      variance: { parts: [given, { kind: 'between' }] },
    };
    await agreesWith(page, runPlan({ ...plan, terms: [] }));
    await page.getByRole('button', { name: 'add a term' }).click();
    await page.locator('.governing form').getByLabel('Column').selectOption('beds');
    await page.locator('.governing form').getByRole('button', { name: 'Add it' }).click();
    await agreesWith(page, runPlan(plan));
    await choose(
      page,
      page.getByRole('button', { name: 'restricted maximum likelihood', exact: true }),
      /Paule-Mandel/,
    );
    await fitted(page);
    await choose(
      page,
      page.getByRole('button', { name: 'the stated structure', exact: true }),
      /Knapp-Hartung\), never narrower/,
    );
    await fitted(page);
    await agreesWith(
      page,
      runPlan({
        ...plan,
        estimate: { method: 'moments', rule: 'paule-mandel' },
        inference: { kind: 'knapp-hartung', floor: true },
      }),
    );
    expect(await page.locator('[data-part=evidence]').innerText()).toContain('τ² by several rules');
    await opened.picture('fit-rents');
  });
});

describe('in the dark', () => {
  it('has the same page', async () => {
    await opened.app.evaluate(({ nativeTheme }) => {
      nativeTheme.themeSource = 'dark';
    }, null);
    await goTo(page, 'Variance');
    await opened.picture('variance-dark');
    await goTo(page, 'Fit');
    await agreesWith(page, run());
    await opened.picture('fit-dark');
  });
});
