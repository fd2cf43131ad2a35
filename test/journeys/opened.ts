import { mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { Page } from 'playwright-core';
import { onTestFinished } from 'vitest';
import { type AppHandle, launchApp } from '../standin/launch.ts';

/** The program as a journey drives it. */
export interface Opened {
  readonly app: AppHandle;
  readonly page: Page;
  /** What the page's console and scripts complained of; a journey ends with this empty. */
  readonly complaints: readonly string[];
  /** The file that the next chooser gives, for opening or for saving; null: none is chosen. */
  readonly choose: (file: string | null) => Promise<void>;
  /** Leaves a picture of the window, to be looked at. */
  readonly picture: (name: string) => Promise<void>;
}

const pictures = resolve('node_modules/.cache/journeys');

export async function openProgram(options: Parameters<typeof launchApp>[0] = {}): Promise<Opened> {
  const app = await launchApp(options);
  const page = await app.firstWindow();
  const complaints: string[] = [];
  page.on('pageerror', (error) => complaints.push(error.stack ?? error.message));
  page.on('console', (message) => {
    if (['error', 'warning'].includes(message.type())) complaints.push(message.text());
  });
  await page.locator('[data-ready=true]').waitFor();
  return {
    app,
    page,
    complaints,
    choose: (file) =>
      app.evaluate(({ dialog }, chosen) => {
        const filePaths = chosen === null ? [] : [chosen];
        dialog.showOpenDialog = async () => ({ canceled: chosen === null, filePaths });
        dialog.showSaveDialog = async () => ({ canceled: chosen === null, filePath: chosen ?? '' });
      }, file),
    picture: async (name) => {
      mkdirSync(pictures, { recursive: true });
      await page.screenshot({ path: join(pictures, `${name}.png`) });
    },
  };
}

/** Opens the demo and waits until it is fitted. */
export async function openDemo({ page }: Pick<Opened, 'page'>): Promise<void> {
  await page.getByRole('button', { name: 'Open the demo' }).click();
  await fitted(page);
}

/** Waits until the fit that is under way is on the screen. */
export async function fitted(page: Page): Promise<void> {
  await page.locator('[data-part=arm] [role=slider]:not([aria-disabled=true])').waitFor();
  await page.locator('progress').waitFor({ state: 'detached' });
}

export async function goTo(page: Page, place: 'Data' | 'Variance' | 'Fit' | 'Report' | 'Trail'): Promise<void> {
  await page.getByRole('navigation').getByRole('link', { name: place, exact: true }).click();
  await page.locator('#page-title', { hasText: place }).waitFor();
}

/** A folder that is gone when the test is over. */
export function folder(): string {
  const path = mkdtempSync(join(tmpdir(), 'steelyard-journey-'));
  onTestFinished(() => rmSync(path, { recursive: true, force: true }));
  return path;
}
