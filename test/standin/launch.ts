// Starts the built program for a test: in Electron where its binary is, else in the stand-in on Chromium. One shape for both.
import { fork } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { _electron, type Browser, type BrowserContext, chromium, type Page } from 'playwright-core';
import { type Line, openLine } from './line.ts';
import { Addresses, chooseFile, copyBy, type Hosted, hostPage } from './pages.ts';

type ElectronModule = typeof import('electron');

export interface AppHandle {
  readonly kind: 'electron' | 'standin';
  readonly firstWindow: () => Promise<Page>;
  readonly evaluate: <R, A>(work: (electron: ElectronModule, word: A) => R | Promise<R>, word: A) => Promise<R>;
  /** What the program did that a page cannot show; empty under Electron. */
  readonly records: readonly { readonly name: string; readonly args: readonly unknown[] }[];
  /** Folder of the program's own small files. */
  readonly profile: string;
  /** Its status, once the program has ended. */
  readonly ended: Promise<number | null>;
  readonly close: () => Promise<void>;
}

interface LaunchOptions {
  readonly main?: string;
  /** The profile of an earlier launch; a fresh one is made, and removed at the end, where none is given. */
  readonly profile?: string;
  /** Words of the command line, such as a project to open. */
  readonly words?: readonly string[];
  readonly env?: Readonly<Record<string, string>>;
  /** An installed browser, to open a window that can be seen. */
  readonly windowIn?: string;
  /** A command that the program's process is started under, such as a tracer; stand-in only. */
  readonly under?: readonly string[];
}

/** How long a program that was told to quit may take. */
const PATIENCE = 15_000;

/** Where Electron's binary lies, if it does. `import('electron')` would not tell: under Node it begins a download. */
export function electronBinary(root = process.cwd()): string | null {
  const folder = join(root, 'node_modules/electron');
  const note = join(folder, 'path.txt');
  if (!existsSync(note)) return null;
  const binary = join(
    process.env['ELECTRON_OVERRIDE_DIST_PATH'] ?? join(folder, 'dist'),
    readFileSync(note, 'utf8').trim(),
  );
  return existsSync(binary) ? binary : null;
}

/** The headless browser of the tests: the one named in STEELYARD_CHROMIUM, or the packed one, unpacked under its version. */
export async function findChromium(): Promise<string> {
  const given = process.env['STEELYARD_CHROMIUM'];
  if (given) return given;
  const { version } = JSON.parse(readFileSync(resolve('node_modules/@sparticuz/chromium/package.json'), 'utf8')) as {
    version: string;
  };
  // The package takes whatever file of that name lies in the folder for temporary files, of any version: it gets a folder of its own.
  const before = process.env['TMPDIR'];
  process.env['TMPDIR'] = resolve(`node_modules/.cache/chromium-${version}`);
  mkdirSync(process.env['TMPDIR'], { recursive: true });
  try {
    const { default: packed } = await import('@sparticuz/chromium');
    return await packed.executablePath();
  } finally {
    if (before === undefined) delete process.env['TMPDIR'];
    else process.env['TMPDIR'] = before;
  }
}

export async function launchApp(options: LaunchOptions = {}): Promise<AppHandle> {
  const main = resolve(options.main ?? 'out/main/main.js');
  const profile = options.profile ?? mkdtempSync(join(tmpdir(), 'steelyard-'));
  const start = {
    ...options,
    main,
    profile,
    env: { ...process.env, STEELYARD_PROFILE: profile, ...options.env } as Record<string, string>,
    tidy: () => {
      if (options.profile === undefined) rmSync(profile, { recursive: true, force: true, maxRetries: 3 });
    },
  };
  const binary = process.env['STEELYARD_STANDIN'] === '1' || options.windowIn ? null : electronBinary();
  return binary === null ? launchStandin(start) : launchElectron(binary, start);
}

interface Start extends LaunchOptions {
  readonly main: string;
  readonly profile: string;
  readonly env: Readonly<Record<string, string>>;
  readonly tidy: () => void;
}

async function launchElectron(binary: string, start: Start): Promise<AppHandle> {
  const app = await _electron.launch({
    executablePath: binary,
    args: [start.main, ...(start.words ?? [])],
    env: start.env,
  });
  const { promise: ended, resolve: end } = Promise.withResolvers<number | null>();
  app.process().once('exit', end);
  return {
    kind: 'electron',
    records: [],
    profile: start.profile,
    ended,
    firstWindow: () => app.firstWindow(),
    evaluate: (work, word) => app.evaluate(work as never, word) as never,
    close: async () => {
      await app.close();
      start.tidy();
    },
  };
}

function launchStandin(start: Start): AppHandle {
  const child = forkProgram(start);
  const records: { name: string; args: readonly unknown[] }[] = [];
  const browser = new Windows(start);
  const first = Promise.withResolvers<Page>();
  first.promise.catch(() => {}); // heard by firstWindow, if anyone asks
  const line = openLine(child, {
    loaded: () => line.tell('ready'),
    record: (name: string, args: readonly unknown[]) => void records.push({ name, args }),
    scheme: browser.addresses.add,
    open: (id: number, options: WindowOptions) => browser.open(id, options, line).catch(first.reject),
    load: async (id: number, address: string) => {
      const { page, load } = await browser.of(id);
      await load(address);
      first.resolve(page);
    },
    send: async (id: number, channel: string, words: readonly unknown[]) =>
      browser.has(id) && (await browser.of(id)).send(channel, words),
    reload: (id: number) => browser.has(id) && browser.of(id).then(({ reload }) => reload().catch(() => {})), // it may close meanwhile
    title: (id: number, title: string) => browser.entitle(id, title),
    theme: (source: Theme) => browser.colour(source),
    choose: async (id: number, endings: readonly string[]) => chooseFile((await browser.of(id)).page, endings),
    copy: async (id: number, kinds: Readonly<Record<string, string>>) => {
      const { page } = await browser.of(id);
      await copyBy(page.context(), page, kinds);
    },
    close: (id: number) => browser.close(id),
  });
  const { promise: ended, resolve: end } = Promise.withResolvers<number | null>();
  child.once('exit', (status) => {
    const reason = `the program ended with status ${status}`;
    end(status);
    first.reject(new Error(reason));
    line.hangUp(reason);
  });
  return {
    kind: 'standin',
    records,
    profile: start.profile,
    ended,
    firstWindow: () => first.promise,
    evaluate: (work, word) => line.call('evaluate', work.toString(), word),
    close: async () => {
      line.tell('quit');
      const late = setTimeout(() => child.kill('SIGKILL'), PATIENCE);
      await ended;
      clearTimeout(late);
      await browser.end();
      start.tidy();
    },
  };
}

function forkProgram({ main, words = [], env, windowIn, under }: Start) {
  const [tracer, ...its] = under ?? [];
  return fork(fileURLToPath(new URL('./boot.ts', import.meta.url)), [main, ...words], {
    env: { ...env, STANDIN_HEADED: windowIn === undefined ? '0' : '1' },
    serialization: 'advanced',
    stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
    ...(tracer === undefined ? { execArgv: [] } : { execPath: tracer, execArgv: [...its, process.execPath] }),
  });
}

type Theme = 'system' | 'light' | 'dark';

interface WindowOptions {
  readonly width: number;
  readonly height: number;
  readonly preload: string | null;
  readonly switches: readonly string[];
  readonly scheme: Theme;
}

/** The Chromium behind a program, headless or an installed one with its window to be seen, and the pages in it. */
class Windows {
  readonly addresses = new Addresses();
  readonly #start: Start;
  readonly #open = new Map<number, Promise<Hosted>>();
  readonly #titles = new Map<number, string>();
  #browser: Promise<Browser> | null = null;
  #context: BrowserContext | null = null;
  constructor(start: Start) {
    this.#start = start;
  }

  /** A page that its user has closed is gone before its window is. */
  has(id: number): boolean {
    return this.#open.has(id);
  }

  of(id: number): Promise<Hosted> {
    return this.#open.get(id) ?? Promise.reject(new Error(`no window ${id}`));
  }

  async open(id: number, options: WindowOptions, line: Line): Promise<void> {
    const hosted = this.#page(options).then(async (page) => {
      page.once('close', () => this.#open.delete(id) && line.tell('close-by-user', id));
      page.once('crash', () => line.tell('contents', id, 'render-process-gone', { reason: 'crashed' }));
      return hostPage({ id, page, line, addresses: this.addresses, preload: options.preload });
    });
    this.#open.set(id, hosted);
    await hosted;
  }

  async #page({ width, height, switches, scheme }: WindowOptions): Promise<Page> {
    const args = ['--disable-features=Translate,MediaRouter', '--no-first-run', ...switches];
    if (this.#start.windowIn !== undefined) return this.#visiblePage(this.#start.windowIn, args, { width, height });
    this.#browser ??= findChromium().then((executablePath) =>
      chromium.launch({ executablePath, args, chromiumSandbox: false }),
    );
    const context = await (await this.#browser).newContext({
      viewport: { width, height },
      colorScheme: scheme === 'dark' ? 'dark' : 'light',
      serviceWorkers: 'block',
    });
    return context.newPage();
  }

  async #visiblePage(executablePath: string, args: string[], size: { width: number; height: number }): Promise<Page> {
    this.#context = await chromium.launchPersistentContext(join(this.#start.profile, 'browser'), {
      executablePath,
      headless: false,
      chromiumSandbox: process.getuid?.() !== 0,
      viewport: null,
      colorScheme: null,
      ignoreDefaultArgs: ['--enable-automation'],
      args: [
        ...args,
        '--app=data:text/html,<title>Steelyard</title>',
        `--window-size=${size.width},${size.height}`,
        '--test-type',
      ],
    });
    return this.#context.pages()[0] ?? this.#context.waitForEvent('page');
  }

  /** Only a window that can be seen has a frame for its title: an installed browser takes it from the page, whichever stands there. */
  async entitle(id: number, title: string): Promise<void> {
    if (this.#start.windowIn === undefined || !this.has(id)) return;
    const { page } = await this.of(id);
    const isFirst = !this.#titles.has(id);
    this.#titles.set(id, title);
    const entitle = () =>
      page.evaluate((text) => void (document.title = text), this.#titles.get(id) ?? '').catch(() => {}); // on its way elsewhere
    if (isFirst) page.on('domcontentloaded', entitle);
    await entitle();
  }

  async colour(source: Theme): Promise<void> {
    const isVisible = this.#start.windowIn !== undefined;
    const colorScheme = source === 'system' ? (isVisible ? null : 'light') : source;
    for (const hosted of this.#open.values()) await (await hosted).page.emulateMedia({ colorScheme });
  }

  async close(id: number): Promise<void> {
    const hosted = this.#open.get(id);
    this.#open.delete(id);
    await (await hosted)?.page.close();
  }

  async end(): Promise<void> {
    await this.#context?.close().catch(() => {}); // its user may have closed it
    await (await this.#browser)?.close();
  }
}
