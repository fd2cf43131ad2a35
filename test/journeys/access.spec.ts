import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { axeFaults, focusFaults, layoutFaults, motionFaults, targetFaults } from './faults.ts';
import { fitted, goTo, type Opened, openDemo, openProgram } from './opened.ts';

const places = ['Data', 'Variance', 'Fit', 'Report', 'Trail'] as const;
type Place = (typeof places)[number];

/** Waits until a screen has everything on it. */
async function settled(page: Page, place: Place): Promise<void> {
  if (place === 'Report') await page.locator('canvas[data-drawn="1"]').waitFor();
  if (place === 'Trail') await page.locator('[data-entry]').first().waitFor();
  await page.evaluate(() => document.fonts.ready.then(() => undefined));
  await page.waitForTimeout(300); // figures are drawn after their room is measured
}

/** The window enlarged: at 200 % a page has half the room each way. */
async function zoom(page: Page, times: number): Promise<void> {
  await page.setViewportSize({ width: 1280 / times, height: 720 / times });
  await page.waitForTimeout(150); // figures, pages and the arm take their new measure
}

describe('every screen', () => {
  let opened: Opened;
  let page: Page;

  beforeAll(async () => {
    opened = await openProgram();
    page = opened.page;
    await zoom(page, 1);
  });
  afterAll(() => opened?.app.close());

  const colour = (source: 'light' | 'dark') =>
    opened.app.evaluate(({ nativeTheme }, wanted) => {
      nativeTheme.themeSource = wanted as 'light' | 'dark';
    }, source as string);

  it('begins with a Start that axe, geometry and the Tab key find no fault with', async () => {
    for (const source of ['light', 'dark'] as const) {
      await colour(source);
      expect(await axeFaults(page), source).toEqual([]);
    }
    await colour('light');
    for (const times of [1, 2]) {
      await zoom(page, times);
      expect(await layoutFaults(page), `${times}`).toEqual([]);
      expect(await targetFaults(page), `${times}`).toEqual([]);
      expect(await focusFaults(page), `${times}`).toEqual([]);
    }
    await zoom(page, 1);
    await openDemo(opened);
  });

  for (const place of places) {
    it(`${place}: axe finds nothing at WCAG 2.2 AA, in light and dark, in high contrast and in forced colours`, async () => {
      await goTo(page, place);
      await settled(page, place);
      for (const source of ['light', 'dark'] as const) {
        await colour(source);
        await page.waitForTimeout(100);
        expect(await axeFaults(page), source).toEqual([]);
        await opened.picture(`access-${place.toLowerCase()}-${source}`);
        await page.emulateMedia({ contrast: 'more' });
        expect(await axeFaults(page), `${source}, more contrast`).toEqual([]);
        await page.emulateMedia({ contrast: null });
      }
      await colour('light');
      await page.emulateMedia({ forcedColors: 'active' });
      expect(await axeFaults(page), 'forced colours').toEqual([]);
      await opened.picture(`access-${place.toLowerCase()}-forced`);
      await page.emulateMedia({ forcedColors: null });
    });

    it(`${place}: nothing is cut, overlaps or is too small to press, at 1280 × 720 and at 200 %`, async () => {
      await goTo(page, place);
      for (const times of [1, 2]) {
        await zoom(page, times);
        await settled(page, place);
        await opened.picture(`access-${place.toLowerCase()}-${times}00`);
        expect(await layoutFaults(page), `${times}00 %`).toEqual([]);
        expect(await targetFaults(page), `${times}00 %`).toEqual([]);
      }
      await zoom(page, 1);
    });

    it(`${place}: the Tab key reaches everything; the focus is seen and never hidden, also at 200 %`, async () => {
      await goTo(page, place);
      for (const times of [1, 2]) {
        await zoom(page, times);
        await settled(page, place);
        expect(await focusFaults(page), `${times}00 %`).toEqual([]);
      }
      await zoom(page, 1);
    });

    it(`${place}: what opens in the margin is without fault, takes the focus, and gives it back`, async () => {
      await goTo(page, place);
      await settled(page, place);
      const phrase = page.getByRole('main').locator('.governed').first();
      await phrase.focus();
      await page.keyboard.press('Enter');
      await page.locator('.governing').waitFor();
      expect(await page.evaluate(() => document.activeElement?.closest('.governing') !== null)).toBe(true);
      expect(await axeFaults(page)).toEqual([]);
      expect(await layoutFaults(page)).toEqual([]);
      expect(await targetFaults(page)).toEqual([]);
      const line = await phrase.boundingBox();
      const panel = await page.locator('.governing').boundingBox();
      expect((panel?.x ?? 0) >= (line?.x ?? 0) + (line?.width ?? 0) || (panel?.y ?? 0) > (line?.y ?? 0)).toBe(true);
      await page.keyboard.press('Escape');
      await page.locator('.governing').waitFor({ state: 'detached' });
      expect(await phrase.evaluate((element) => element === document.activeElement)).toBe(true);
    });
  }

  it('is looked at by nets that catch what is planted for them', async () => {
    await goTo(page, 'Trail');
    await page.evaluate(() => {
      const plant = document.createElement('div');
      plant.id = 'plant';
      plant.innerHTML = `
        <p style="position: relative; height: 2rem"><span style="position: absolute; left: 0">laid under</span>
          <span style="position: absolute; left: 1rem">laid over</span></p>
        <p style="width: 3rem; overflow: hidden; white-space: nowrap">cut off at the side</p>
        <p><button style="width: 9px; min-height: 9px; height: 9px; padding: 0"></button><button>near it</button></p>
        <button style="outline: none">no outline</button>
        <span role="button" style="color: #999; background: #aaa">never reached</span>
        <i style="transition: color 2s">moves</i>`;
      document.querySelector('article')?.append(plant);
    });
    const layout = (await layoutFaults(page)).join('\n');
    expect(layout).toContain('“laid under” and “laid over” overlap');
    expect(layout).toContain('“cut off at the side” is cut at a side');
    expect((await targetFaults(page)).join('\n')).toContain('is 9 × 9');
    const focus = (await focusFaults(page)).join('\n');
    expect(focus).toContain('“no outline” does not show the focus');
    const axe = (await axeFaults(page)).join('\n');
    expect(axe).toContain('button-name');
    expect(axe).toContain('color-contrast');
    expect((await motionFaults(page)).join('\n')).toContain('is set to move');
    await page.locator('#plant').evaluate((plant) => plant.remove());
  });

  it('changes places by keys, and says at each where it is', async () => {
    for (const [i, place] of places.entries()) {
      await page.keyboard.press(`Control+${i + 1}`);
      await page.locator('#page-title', { hasText: place }).waitFor();
      expect(await page.evaluate(() => document.activeElement?.id)).toBe('page-title');
      await page.locator('nav a[aria-current=page]', { hasText: place }).waitFor();
    }
  });

  it('has no fault in the report as text, nor in the dialogues of the report', async () => {
    await goTo(page, 'Report');
    await settled(page, 'Report');
    await page.getByRole('button', { name: 'Read as text' }).click();
    await page.locator('[data-part=running-text] [data-figure] svg').first().waitFor();
    for (const times of [1, 2]) {
      await zoom(page, times);
      await page.waitForTimeout(300);
      expect(await layoutFaults(page), `${times}00 %`).toEqual([]);
    }
    await zoom(page, 1);
    expect(await axeFaults(page)).toEqual([]);
    await page.getByRole('button', { name: 'Show the pages' }).click();
    const freeze = page.getByRole('button', { name: 'Freeze an edition …' });
    await freeze.click();
    await page.getByRole('dialog').waitFor();
    expect(await axeFaults(page)).toEqual([]);
    await zoom(page, 2);
    expect(await layoutFaults(page)).toEqual([]);
    await zoom(page, 1);
    await page.keyboard.press('Escape');
    await page.getByRole('dialog').waitFor({ state: 'detached' });
    expect(await freeze.evaluate((element) => element === document.activeElement)).toBe(true);
  });

  it('keeps still where the reader asked for less motion, also while it fits', async () => {
    await page.emulateMedia({ reducedMotion: 'reduce' });
    for (const place of places) {
      await goTo(page, place);
      await settled(page, place);
      expect(await motionFaults(page), place).toEqual([]);
    }
    await page.emulateMedia({ reducedMotion: null });
    await fitted(page);
  });

  it('shows by line and mark, not by colour alone, where colours are forced', async () => {
    await goTo(page, 'Fit');
    await page.emulateMedia({ forcedColors: 'active' });
    await page.locator('[data-part=arm] [role=slider]').focus();
    await page.keyboard.press('End');
    const strokes = await page.evaluate(() =>
      ['.ticks', '.chosen', '.line'].map((part) => {
        const found = document.querySelector(`[data-part=arm] ${part}`);
        return found === null
          ? null
          : getComputedStyle(found).stroke !== getComputedStyle(document.body).backgroundColor;
      }),
    );
    expect(strokes).toEqual([true, true, true]);
    const phrase = page.locator('[data-part=statement] .governed').first();
    expect(await phrase.evaluate((element) => getComputedStyle(element).textDecorationLine)).toBe('underline');
    await opened.picture('access-forced-marked');
    await page.emulateMedia({ forcedColors: null });
    await page.keyboard.press('Escape');
  });

  it('leaves no complaint on the console', () => {
    expect(opened.complaints).toEqual([]);
  });
});
