import { readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type AppHandle, launchApp } from '../standin/launch.ts';

let app: AppHandle;
let page: Page;
const errors: string[] = [];

beforeAll(async () => {
  app = await launchApp();
  page = await app.firstWindow();
  page.on('pageerror', (error) => errors.push(error.message));
  page.on('console', (message) => message.type() === 'error' && errors.push(message.text()));
});
afterAll(() => app?.close());

describe('the bare window', () => {
  it('shows the demo’s coefficients as text, fetched through preload and bridge from the engine', async () => {
    const lines = page.locator('[data-part=coefficient]');
    await lines.first().waitFor();
    const texts = await lines.allInnerTexts();
    const plan = JSON.parse(readFileSync(resolve('resources/demo/plan.json'), 'utf8')) as {
      title: string;
      terms: { column: string }[];
    };
    expect(await page.locator('h2').innerText()).toBe(plan.title);
    expect(texts).toHaveLength(1 + plan.terms.length);
    for (const { column } of plan.terms) expect(texts.some((text) => text.includes(column))).toBe(true);
    await page.screenshot({ path: join('node_modules/.cache', 'bare-window.png') });
  });

  it('gives the page one frozen door, and neither Node nor the preload’s own names', async () => {
    expect(
      await page.evaluate(() => [
        typeof (globalThis as never as { require: unknown }).require,
        typeof (globalThis as never as { process: unknown }).process,
        Object.keys(window.steelyard),
        Object.isFrozen(window.steelyard),
      ]),
    ).toEqual(['undefined', 'undefined', ['ask', 'listen'], true]);
  });

  it('refuses an unknown question and a payload of another shape as outcomes', async () => {
    expect(await page.evaluate(() => window.steelyard.ask('constructor', {}))).toMatchObject({
      ok: false,
      problems: [{ code: 'unknown-kind' }],
    });
    expect(await page.evaluate(() => window.steelyard.ask('demo.coefficients', { more: 1 }))).toMatchObject({
      ok: false,
    });
  });

  it('runs sandboxed and isolated', () => {
    if (app.kind === 'electron') return expect(app.kind).toBe('electron');
    const made = app.records.find((record) => record.name === 'BrowserWindow')?.args[0] as { webPreferences: object };
    expect(made.webPreferences).toMatchObject({
      contextIsolation: true,
      sandbox: true,
      nodeIntegration: false,
      webSecurity: true,
    });
  });

  it('leaves no error on the console', () => {
    expect(errors).toEqual([]);
  });
});
