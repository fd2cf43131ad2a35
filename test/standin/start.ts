// `npm start`: the built program, in Electron where its binary is or can be fetched, else in the window of an installed browser by
// way of the stand-in (a developer's and demonstrator's way, over a pipe: no port is opened), else a sentence that says what does the job.
import { spawn, spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { homedir } from 'node:os';
import { delimiter, join, resolve } from 'node:path';
import { electronBinary, launchApp } from './launch.ts';

const root = resolve(import.meta.dirname, '../..');
const words = process.argv.slice(2).filter((word) => word !== '.');
const isDeveloping = process.env['ELECTRON_RENDERER_URL'] !== undefined;
const withoutWindow = 'Without a window, this does the job: npm run --silent steelyard -- run PLAN.json --out FOLDER';

/** How long the fetching of Electron's binary may take. */
const PATIENCE = 180_000;

function fetchElectron(): string | null {
  const installer = join(root, 'node_modules/electron/install.js');
  if (process.env['STEELYARD_STANDIN'] === '1' || !existsSync(installer)) return null;
  console.log('The Electron binary is not installed yet; it is fetched now.');
  spawnSync(process.execPath, [installer], { stdio: ['ignore', 'inherit', 'ignore'], timeout: PATIENCE });
  return electronBinary(root);
}

/** An installed Chrome, Chromium or Edge: the one named in STEELYARD_CHROMIUM, one on the path, or one in its usual place. */
function installedBrowser(): string | null {
  const names = [
    'chromium',
    'chromium-browser',
    'google-chrome',
    'google-chrome-stable',
    'microsoft-edge',
    'microsoft-edge-stable',
  ];
  const apps = ['Google Chrome', 'Chromium', 'Microsoft Edge'].map(
    (name) => `/Applications/${name}.app/Contents/MacOS/${name}`,
  );
  const onWindows = [
    'Google/Chrome/Application/chrome.exe',
    'Chromium/Application/chrome.exe',
    'Microsoft/Edge/Application/msedge.exe',
  ];
  const folders = ['PROGRAMFILES', 'PROGRAMFILES(X86)', 'LOCALAPPDATA'].flatMap((name) => process.env[name] ?? []);
  const places = [
    ...(process.env['STEELYARD_CHROMIUM'] ? [process.env['STEELYARD_CHROMIUM']] : []),
    ...(process.env['PATH'] ?? '').split(delimiter).flatMap((folder) => names.map((name) => join(folder, name))),
    ...(process.platform === 'darwin' ? apps : []),
    ...(process.platform === 'win32' ? folders.flatMap((folder) => onWindows.map((file) => join(folder, file))) : []),
  ];
  return places.find((place) => existsSync(place)) ?? null;
}

/** The folder that Electron would use too, so that the recent projects are the same. */
function profileFolder(): string {
  const usual: Partial<Record<NodeJS.Platform, string | undefined>> = {
    win32: process.env['APPDATA'],
    darwin: join(homedir(), 'Library/Application Support'),
  };
  const given = process.env['STEELYARD_PROFILE'];
  return (
    given ?? join(usual[process.platform] ?? process.env['XDG_CONFIG_HOME'] ?? join(homedir(), '.config'), 'steelyard')
  );
}

async function openInBrowser(browser: string): Promise<number> {
  console.log(
    `The Electron binary could not be had: the same built program opens in ${browser} through the stand-in of test/standin.`,
  );
  const app = await launchApp({
    main: join(root, 'out/main/main.js'),
    windowIn: browser,
    profile: profileFolder(),
    words,
    env: isDeveloping ? { STANDIN_PACKAGED: '0' } : {},
  });
  try {
    const opened = await Promise.race([app.ended, app.firstWindow()]);
    if (opened === 0) console.log('The program runs already: its window has come to the front.');
    return (await app.ended) ?? 1;
  } catch (error) {
    const [reason] = String(error instanceof Error ? error.message : error).split('\n');
    console.error(`No window could be opened in ${browser} (${reason}). ${withoutWindow}`);
    return 1;
  } finally {
    await app.close();
  }
}

function openInElectron(binary: string): Promise<number> {
  return new Promise((ended) => {
    spawn(binary, [root, ...words], { stdio: 'inherit' }).on('exit', (status) => ended(status ?? 1));
  });
}

/** `npm start -- --live`: electron-vite's page server, which starts this file in Electron's stead where there is no binary. */
function develop(): Promise<number> {
  const isThere = electronBinary(root) !== null;
  const vite = join(root, 'node_modules/electron-vite/bin/electron-vite.js');
  const instead = isThere ? [] : ['--entry', import.meta.filename];
  return new Promise((ended) => {
    spawn(process.execPath, [vite, 'dev', ...instead], {
      cwd: root,
      stdio: 'inherit',
      env: { ...process.env, ...(isThere ? {} : { ELECTRON_EXEC_PATH: process.execPath }) },
    }).on('exit', (status) => ended(status ?? 1));
  });
}

async function start(): Promise<number> {
  if (words.includes('--live')) return develop();
  if (!existsSync(join(root, 'out/main/main.js'))) {
    const builder = join(root, 'node_modules/electron-vite/bin/electron-vite.js');
    const built = spawnSync(process.execPath, [builder, 'build', '--logLevel', 'warn'], {
      cwd: root,
      stdio: 'inherit',
    });
    if (built.status !== 0) return 1;
  }
  const binary = process.env['STEELYARD_STANDIN'] === '1' ? null : (electronBinary(root) ?? fetchElectron());
  if (binary !== null) return openInElectron(binary);
  const browser = installedBrowser();
  if (browser !== null) return openInBrowser(browser);
  console.log(
    `There is neither an Electron binary nor a Chrome, Chromium or Edge here to open a window in. ${withoutWindow}`,
  );
  return 1;
}

process.exit(await start());
