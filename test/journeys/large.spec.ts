import { spawnSync } from 'node:child_process';
import { writeFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import type { Page } from 'playwright-core';
import { describe, expect, it, onTestFinished } from 'vitest';
import { fitted, folder, goTo, type Opened, openProgram } from './opened.ts';

/** Made-up cells, the same at every call. */
function table(count: number): string {
  let state = 1;
  const draw = () => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647;
  };
  const rows = Array.from({ length: count }, (_, cell) => {
    const [x, noise, n] = [draw(), draw() - 0.5, 5 + Math.floor(400 * draw())];
    return `place ${cell},${(1 + 2 * x + noise).toFixed(4)},${n},${x.toFixed(4)}`;
  });
  return `cell,y,n,x\n${rows.join('\n')}\n`;
}

async function withTable(count: number): Promise<Opened & { readonly project: string }> {
  const opened = await openProgram();
  const at = folder();
  const project = join(at, 'many.steelyard');
  const file = join(at, 'cells.csv');
  writeFileSync(file, table(count));
  await opened.choose(project);
  await opened.page.getByRole('button', { name: 'New project …' }).click();
  await opened.page.getByRole('button', { name: 'Choose a file' }).waitFor();
  await opened.choose(file);
  await opened.page.getByRole('button', { name: 'Choose a file' }).click();
  return { ...opened, project };
}

async function endWell({ app, complaints }: Opened): Promise<void> {
  await app.close();
  expect(complaints).toEqual([]);
}

/** How much ink lies on a figure's cloud, and where it is heaviest: to tell one view from another. */
const inkOf = (page: Page) =>
  page.locator('[data-figure=glance] canvas').evaluate((canvas: HTMLCanvasElement) => {
    const { width, height } = canvas;
    const copy = new OffscreenCanvas(width, height).getContext('2d', { willReadFrequently: true });
    copy?.drawImage(canvas, 0, 0);
    const data = copy?.getImageData(0, 0, width, height).data ?? [];
    let ink = 0;
    let place = 0;
    for (let i = 3; i < data.length; i += 4) {
      ink += data[i] as number;
      place += (data[i] as number) * i;
    }
    return { ink, place: ink === 0 ? 0 : place / ink };
  });

describe('a table of 100,000 rows and more', () => {
  it('is drawn as a cloud that comes nearer, is dragged and walked by keys, with axes that follow', async () => {
    const opened = await withTable(100_000);
    onTestFinished(() => endWell(opened));
    const { page } = opened;
    const figure = page.locator('[data-figure=glance]');
    await figure.locator('[data-drawn]').waitFor();
    await figure.scrollIntoViewIfNeeded();
    const labels = () => figure.locator('svg text').allInnerTexts();
    const all = { ink: await inkOf(page), labels: await labels() };
    expect(all.ink.ink).toBeGreaterThan(0);
    await opened.picture('large-all');

    const chart = figure.locator('.chart');
    const box = (await chart.boundingBox()) as { x: number; y: number; width: number; height: number };
    const [x, y] = [box.x + box.width * 0.6, box.y + box.height * 0.5];
    await page.mouse.move(x, y);
    await page.mouse.down();
    await page.mouse.move(x - 90, y + 40, { steps: 12 });
    await page.mouse.up();
    const dragged = { ink: await inkOf(page), labels: await labels() };
    expect(dragged.ink).not.toEqual(all.ink);
    expect(dragged.labels).not.toEqual(all.labels);
    await opened.picture('large-dragged');

    const group = figure.getByRole('group');
    await group.focus();
    await page.keyboard.press('0');
    expect(await inkOf(page)).toEqual(all.ink);
    expect(await labels()).toEqual(all.labels);
    for (let i = 0; i < 6; i++) await page.keyboard.press('+');
    const near = await inkOf(page);
    expect(near.ink).toBeLessThan(all.ink.ink); // fewer points, each as dark as before
    await page.keyboard.press('Shift+ArrowRight');
    expect(await inkOf(page)).not.toEqual(near);
    await opened.picture('large-near');
    await page.keyboard.press('0');
    await page.keyboard.press('ArrowRight');
    await page.keyboard.press('ArrowRight');
    await figure.locator('.ring').waitFor();
    expect(await figure.locator('.ring').innerText()).toMatch(/^place \d+$/);
    await page.emulateMedia({ colorScheme: 'dark' });
    await opened.picture('large-dark');
    await page.keyboard.press('t');
    await figure.getByText('of 100').first().waitFor(); // rows shown of all
  });

  it('can be stopped while its rows are looked at, and looked at later', async () => {
    const opened = await withTable(300_000);
    onTestFinished(() => endWell(opened));
    const { page } = opened;
    // At once when it is there: it goes as soon as the rows are looked at.
    await page.waitForFunction(() => {
      const stop = document.querySelector<HTMLElement>('[data-under-way] button');
      stop?.click();
      return stop !== null;
    });
    const read = page.getByText('300\u202f000 rows: 300\u202f000 are used as cells');
    const stopped = page.getByText('Stopped before the rows were looked at.');
    // Whatever was under way, reading the file or looking at its rows, nothing of it is left half done.
    await stopped
      .or(page.getByRole('button', { name: 'Choose a file' }))
      .first()
      .waitFor();
    await opened.picture('large-stopped');
    if ((await stopped.count()) > 0) await page.getByRole('button', { name: 'Look at them' }).click();
    else await page.getByRole('button', { name: 'Choose a file' }).click();
    await read.waitFor();
  });
});

describe('a fit of 6,000 cells', () => {
  it('is under way when the window is closed: it ends soon and cleanly, and is made when the project is opened again', async () => {
    const opened = await withTable(6000);
    const { page, app, project } = opened;
    await page.locator('[data-part=used]').waitFor();
    await page.getByRole('button', { name: /^Accept these data/ }).click();
    await page.getByRole('button', { name: /^State this structure/ }).click();
    await page.locator('progress').waitFor();
    const asked = performance.now();
    await app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]?.close(), null);
    expect(await app.ended).toBe(0);
    expect(performance.now() - asked).toBeLessThan(10_000);
    await endWell(opened);
    expect(spawnSync(process.execPath, [resolve('out/main/command.js'), 'check', project]).status).toBe(0);
    const again = await openProgram({ words: [project] });
    onTestFinished(() => endWell(again));
    await fitted(again.page);
    // The pages are set as a job as well, and can be stopped and set after all.
    await goTo(again.page, 'Report');
    await again.page.getByRole('main').locator('[data-under-way] button').first().click();
    await again.page.getByText('Stopped before the pages were set.').waitFor();
    await again.picture('large-pages-stopped');
    await again.page.getByRole('button', { name: 'Set them' }).click();
    await again.page.locator('canvas[data-drawn="1"]').waitFor({ timeout: 60_000 });
  });
});
