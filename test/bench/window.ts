// The window's figures, measured in the built program: in Electron where its binary is, else through the stand-in on Chromium.
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { type AppHandle, launchApp } from '../standin/launch.ts';

/** Prints a line: what was measured, and the milliseconds of each try. */
type Say = (what: string, taken: readonly number[]) => void;

interface Window {
  readonly app: AppHandle;
  readonly page: Page;
}

const PAN = 40;

async function opened(): Promise<Window> {
  const app = await launchApp();
  const page = await app.firstWindow();
  await page.locator('[data-ready=true]').waitFor();
  return { app, page };
}

async function times(count: number, work: () => Promise<number>): Promise<number[]> {
  const taken: number[] = [];
  for (let i = 0; i < count; i++) taken.push(await work());
  return taken;
}

async function since(from: number, done: Promise<unknown>): Promise<number> {
  await done;
  return performance.now() - from;
}

/** From the start of the program's process to the first thing that the page paints. */
async function firstPaint(): Promise<number> {
  const from = Date.now();
  const { app, page } = await opened();
  const painted = await page.evaluate(
    () => performance.timeOrigin + (performance.getEntriesByName('first-contentful-paint')[0]?.startTime ?? Number.NaN),
  );
  await app.close();
  return painted - from;
}

/** The next choosers give these: a new project, and the table that it is to hold. */
function choose({ app }: Window, project: string, table: string): Promise<void> {
  return app.evaluate(
    ({ dialog }, [filePath, file]) => {
      dialog.showSaveDialog = (async () => ({ canceled: false, filePath })) as never;
      dialog.showOpenDialog = (async () => ({ canceled: false, filePaths: [file] })) as never;
    },
    [project, table] as const,
  );
}

const button = ({ page }: Window, name: string | RegExp) => page.getByRole('button', { name });

/** A new project with a table: milliseconds until its first rows stand on the screen, and until its cells do. */
async function take(window: Window, project: string, table: string): Promise<{ rows: number; cells: number }> {
  await choose(window, project, table);
  await button(window, 'New project').click();
  await button(window, 'Choose a file').waitFor();
  const from = performance.now();
  await button(window, 'Choose a file').click();
  const patience = { timeout: 120_000 };
  const rows = await since(from, window.page.getByRole('heading', { name: 'What each column is' }).waitFor(patience));
  const cells = await since(from, window.page.locator('[data-figure=glance] [data-drawn]').waitFor(patience));
  return { rows, cells };
}

/** A drag across a figure: milliseconds from each move of the pointer to the picture that follows it. */
async function drag({ page }: Window, figure: string): Promise<number[]> {
  const chart = page.locator(`[data-figure=${figure}] .chart`);
  await chart.scrollIntoViewIfNeeded();
  const box = (await chart.boundingBox()) as { x: number; y: number; width: number; height: number };
  await page.evaluate(() => {
    const taken: number[] = [];
    Object.assign(window, { taken });
    addEventListener(
      'pointermove',
      () => {
        const from = performance.now();
        // After the next picture: a task that follows the frame.
        requestAnimationFrame(() => {
          const channel = new MessageChannel();
          channel.port1.onmessage = () => taken.push(performance.now() - from);
          channel.port2.postMessage(null);
        });
      },
      { capture: true },
    );
  });
  const [x, y] = [box.x + box.width / 2, box.y + box.height / 2];
  await page.mouse.move(x, y);
  await page.mouse.down();
  for (let i = 1; i <= PAN; i++) await page.mouse.move(x + 3 * i, y - i);
  await page.mouse.up();
  return page.evaluate(() => (window as unknown as { taken: number[] }).taken.slice(2));
}

/** Measures the window: its start, the import of a large table, the pan of its points, and a refit of many cells. table: comma-separated text of so many rows. */
export async function measureWindow(say: Say, table: (rows: number) => string): Promise<void> {
  const scratch = mkdtempSync(join(tmpdir(), 'steelyard-bench-'));
  const [large, middle] = [100_000, 10_000].map((rows) => {
    const file = join(scratch, `${rows}.csv`);
    writeFileSync(file, table(rows));
    return file;
  }) as [string, string];
  let made = 0;
  const project = () => join(scratch, `${++made}.steelyard`);
  say('window, first paint after start', await times(5, firstPaint));

  const imports = { rows: [] as number[], cells: [] as number[] };
  let panned: number[] = [];
  for (let i = 0; i < 3; i++) {
    const window = await opened();
    const { rows, cells } = await take(window, project(), large);
    imports.rows.push(rows);
    imports.cells.push(cells);
    if (i === 2) panned = await drag(window, 'glance');
    await window.app.close();
  }
  say('window, import of 100,000 rows to a visible table', imports.rows);
  say('the same to its cells, drawn and counted', imports.cells);
  say('window, pan of 100,000 points, a move to its picture', panned);
  say('window, refit of 10,000 cells to updated charts', await refits(project(), middle));
  rmSync(scratch, { recursive: true, force: true });
}

/** A plan of many cells is fitted, then its structure changed to and fro: milliseconds from the click to the new curves. */
async function refits(project: string, table: string): Promise<number[]> {
  const window = await opened();
  const { page } = window;
  const patience = { timeout: 120_000 };
  await take(window, project, table);
  await button(window, /^Accept these data/).click();
  await button(window, /^State this structure/).click();
  await page.getByRole('link', { name: 'Variance', exact: true }).click();
  const drawn = page.locator('[data-figure=squared-residuals] [data-drawn]');
  await drawn.waitFor(patience);
  const beyond = page.locator('[data-part=statement] .governed').nth(1);
  const taken: number[] = [];
  for (const choice of ['nothing', 'a variance between cells', 'nothing']) {
    await beyond.click();
    const before = await drawn.getAttribute('data-drawn');
    const from = performance.now();
    await page.locator('.governing').getByRole('button', { name: choice }).first().click();
    await page.locator('progress').waitFor();
    await page.locator('progress').waitFor({ state: 'detached', ...patience });
    const redrawn = (drawings: string | null) =>
      document.querySelector('[data-figure=squared-residuals] [data-drawn]')?.getAttribute('data-drawn') !== drawings;
    taken.push(await since(from, page.waitForFunction(redrawn, before, patience)));
  }
  await window.app.close();
  return taken;
}
