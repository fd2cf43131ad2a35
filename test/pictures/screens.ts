// Every screen's picture for the README, from the demo, light; Fit in dark too. Part of `npm run pictures`; alone: node test/pictures/screens.ts
import { mkdirSync } from 'node:fs';
import { join, resolve } from 'node:path';
import type { Page } from 'playwright-core';
import { launchApp } from '../standin/launch.ts';

const out = resolve(import.meta.dirname, '../../resources/pictures');
const size = { width: 1280, height: 860 };

interface Picture {
  readonly name: string;
  readonly place: 'Data' | 'Variance' | 'Fit' | 'Report' | 'Trail';
  readonly dark?: boolean;
  /** What is done before the picture is taken. */
  readonly first?: (page: Page) => Promise<void>;
}

/** Brings the heading of a section to the top of the page. */
const at = (selector: string) => async (page: Page) => {
  const section = page.locator(selector).first();
  await section.waitFor();
  await section.evaluate((element) => element.scrollIntoView({ block: 'start' }));
};

/** The same, with what governs a phrase of it opened. */
const opens = (selector: string, phrase: string) => async (page: Page) => {
  await at(selector)(page);
  await page.locator(selector).getByRole('button', { name: phrase, exact: true }).click();
  await page.locator('.governing').waitFor();
};

const pictures: readonly Picture[] = [
  { name: 'data', place: 'Data' },
  { name: 'data-register', place: 'Data', first: at('h2:has-text("Attendance")') },
  { name: 'variance', place: 'Variance' },
  {
    name: 'variance-parts',
    place: 'Variance',
    first: opens('[data-part=structure]', 'one answer’s variance over the number of respondents'),
  },
  { name: 'variance-squared-residuals', place: 'Variance', first: at('[data-figure=squared-residuals]') },
  { name: 'fit', place: 'Fit' },
  { name: 'fit-price', place: 'Fit', first: at('[data-part=price]') },
  { name: 'fit-beam', place: 'Fit', first: at('[data-figure=beam]') },
  { name: 'fit-dark', place: 'Fit', dark: true },
  { name: 'fit-evidence', place: 'Fit', first: at('[data-part=evidence]') },
  { name: 'report', place: 'Report' },
  {
    name: 'report-sections',
    place: 'Report',
    first: async (page) => {
      await page.getByRole('button', { name: 'every section' }).click();
      await page.locator('.governing').waitFor();
    },
  },
  { name: 'trail', place: 'Trail' },
];

/** Takes every picture; answers their names. */
export async function takeScreens(): Promise<string[]> {
  mkdirSync(out, { recursive: true });
  const app = await launchApp();
  const taken: string[] = [];
  const save = async (page: Page, name: string, keepsFocus = false) => {
    if (!keepsFocus) await page.evaluate(() => (document.activeElement as HTMLElement | null)?.blur());
    await page.evaluate(() => document.fonts.ready.then(() => undefined));
    await page.waitForTimeout(400); // figures are drawn after their room is measured
    await page.screenshot({ path: join(out, `screen-${name}.png`) });
    taken.push(name);
  };
  try {
    const page = await app.firstWindow();
    await page.setViewportSize(size);
    await page.locator('[data-ready=true]').waitFor();
    await save(page, 'start');
    await page.getByRole('button', { name: 'Open the demo' }).click();
    await page.locator('[data-part=arm] [role=slider]:not([aria-disabled=true])').waitFor();
    await page.locator('progress').waitFor({ state: 'detached' });
    for (const { name, place, dark = false, first } of pictures) {
      await app.evaluate(
        ({ nativeTheme }, source) => {
          nativeTheme.themeSource = source as 'light' | 'dark';
        },
        dark ? 'dark' : 'light',
      );
      if ((await page.locator('.governing').count()) > 0) await page.keyboard.press('Escape');
      await page.getByRole('navigation').getByRole('link', { name: place, exact: true }).click();
      await page.locator('#page-title', { hasText: place }).waitFor();
      await page.locator('main').evaluate((main) => main.scrollTo(0, 0));
      if (place === 'Report') await page.locator('canvas[data-drawn="1"]').waitFor();
      await first?.(page);
      await save(page, name, first !== undefined);
    }
  } finally {
    await app.close();
  }
  return taken;
}

if (process.argv[1] === import.meta.filename) {
  const taken = await takeScreens();
  console.log(`${taken.length} pictures of screens in resources/pictures`);
}
