// One launcher, two back ends: real Electron when its binary is there, else the stand-in on Chromium.
import { type ChildProcess, fork } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { _electron, type Browser, type BrowserContext, chromium, type Frame, type Page } from 'playwright-core';

type ElectronModule = typeof import('electron');
interface Recorded {
  name: string;
  args: unknown[];
}
export interface AppHandle {
  readonly kind: 'electron' | 'standin';
  firstWindow(): Promise<Page>;
  evaluate<R, A>(fn: (electron: ElectronModule, arg: A) => R | Promise<R>, arg: A): Promise<R>;
  /** What the stand-in recorded; empty under real Electron. */
  readonly records: readonly Recorded[];
  close(): Promise<void>;
}
export interface LaunchOptions {
  main?: string;
  userData?: string;
  headed?: boolean;
  executablePath?: string;
  env?: Record<string, string>;
}

// biome-ignore lint/suspicious/noExplicitAny: messages of our own child process
type Wire = Record<string, any> & { id: number };

const here = (p: string) => fileURLToPath(new URL(p, import.meta.url));

/** Never `import('electron')` to find out: under Node that starts a download. */
export function electronBinary(root = process.cwd()): string | undefined {
  const dir = join(root, 'node_modules/electron');
  const at = join(dir, 'path.txt');
  if (!existsSync(at)) return undefined;
  const exe = join(process.env['ELECTRON_OVERRIDE_DIST_PATH'] ?? join(dir, 'dist'), readFileSync(at, 'utf8').trim());
  return existsSync(exe) ? exe : undefined;
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

export async function launchApp(o: LaunchOptions = {}): Promise<AppHandle> {
  const main = resolve(o.main ?? 'out/main/main.js');
  const userData = o.userData ?? mkdtempSync(join(tmpdir(), 'steelyard-'));
  const env = { ...process.env, STEELYARD_PROFILE: userData, ...o.env } as Record<string, string>;
  const exe = process.env['STEELYARD_STANDIN'] === '1' ? undefined : electronBinary();
  if (exe) {
    const real = await _electron.launch({ executablePath: exe, args: [main], env });
    return {
      kind: 'electron',
      records: [],
      firstWindow: () => real.firstWindow(),
      evaluate: (fn, arg) => real.evaluate(fn as never, arg) as never,
      close: () => real.close(),
    };
  }
  return standin(main, env, o);
}

const toPage = (url: string, schemes: Set<string>) => {
  const u = new URL(url);
  return schemes.has(u.protocol.slice(0, -1))
    ? `https://${u.host}.${u.protocol.slice(0, -1)}.invalid${u.pathname}${u.search}${u.hash}`
    : url;
};
const toApp = (url: string) => url.replace(/^https:\/\/([^/]+)\.([a-z][a-z0-9+.-]*)\.invalid/, '$2://$1');

async function standin(main: string, env: Record<string, string>, o: LaunchOptions): Promise<AppHandle> {
  const child: ChildProcess = fork(here('./boot.ts'), [main], {
    env: { ...env, STANDIN_HEADED: o.headed ? '1' : '0' },
    serialization: 'advanced',
    stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
  });
  const gone = new Promise<number | null>((ok) => child.once('exit', ok));
  const executablePath = o.executablePath ?? (await findChromium());
  const schemes = new Set<string>();
  const records: Recorded[] = [];
  const pages = new Map<number, Page>();
  const waiting = new Map<number, { ok(v: unknown): void; fail(e: Error): void }>();
  const firsts: ((p: Page) => void)[] = [];
  let seq = 0;
  let first: Page | undefined;
  let browser: Browser | undefined;
  let context: BrowserContext;
  const tell = (m: object) => void (child.connected && child.send(m));
  const ask = <T>(m: object) =>
    new Promise<T>((ok, fail) => {
      waiting.set(++seq, { ok: ok as (v: unknown) => void, fail });
      tell({ ...m, seq });
    });

  const args = ['--disable-features=Translate,MediaRouter', '--no-first-run'];
  if (o.headed) {
    // launched below, in app mode, by the first window
  } else {
    browser = await chromium.launch({ executablePath, args, chromiumSandbox: false });
  }
  const wire = async (ctx: BrowserContext, page: Page, id: number) => {
    ctx.on('page', (p) => void (p !== page && p.close()));
    await ctx.route('**/*', async (route) => {
      const req = route.request();
      const url = toApp(req.url());
      const scheme = new URL(url).protocol.slice(0, -1);
      if (req.isNavigationRequest()) {
        let frame: Frame | undefined;
        try {
          frame = req.frame();
        } catch {
          // a popup's first request comes before its frame: target=_blank, window.open
        }
        if (!frame || frame.page() !== page) {
          tell({ t: 'window-open', id, url }); // setWindowOpenHandler decides; 'allow' is not implemented
          return route.abort('aborted'); // any other code commits Chromium's error page
        }
        if (
          frame.parentFrame() === null &&
          expected.get(id) !== req.url() &&
          (await ask<boolean>({ t: 'will-navigate', id, url }))
        )
          return route.abort('aborted');
      }
      if (await ask<boolean>({ t: 'request', url, resourceType: req.resourceType() }))
        return route.abort('blockedbyclient');
      if (!schemes.has(scheme)) return route.continue();
      const r = await ask<{ status: number; headers: Record<string, string>; body: Uint8Array }>({
        t: 'fetch',
        url,
        method: req.method(),
        headers: req.headers(),
      });
      return route.fulfill({ status: r.status, headers: r.headers, body: Buffer.from(r.body) });
    });
  };
  const open = async (
    id: number,
    options: { width?: number; height?: number; webPreferences?: Record<string, unknown> },
  ) => {
    let page: Page;
    if (o.headed) {
      context = await chromium.launchPersistentContext(join(env['STEELYARD_PROFILE'] ?? tmpdir(), 'chromium'), {
        executablePath,
        headless: false,
        chromiumSandbox: process.getuid?.() !== 0,
        viewport: null,
        ignoreDefaultArgs: ['--enable-automation'],
        args: [
          ...args,
          '--app=data:text/html,<title>starting</title>',
          `--window-size=${options.width ?? 800},${options.height ?? 600}`,
          '--window-position=0,0',
          '--test-type',
        ],
      });
      page = context.pages()[0] ?? (await context.waitForEvent('page'));
    } else {
      context = await (browser as Browser).newContext({
        viewport: { width: options.width ?? 800, height: options.height ?? 600 },
      });
      page = await context.newPage();
    }
    pages.set(id, page);
    await wire(context, page, id);
    await page.exposeBinding('__standin', async ({ frame }, m: { t: string; channel: string; args: unknown[] }) => {
      const url = toApp(frame.url());
      if (m.t === 'message') return tell({ ...m, id, url });
      return ask({ ...m, id, url }).then(
        (value) => ({ value }),
        (e: Error) => ({ error: e.message }),
      );
    });
    const preload = options.webPreferences?.['preload'];
    if (typeof preload === 'string') {
      await page.addInitScript(
        `(() => {${readFileSync(here('./preload-host.js'), 'utf8')}\npreloadHost(${JSON.stringify(readFileSync(preload, 'utf8'))});})()`,
      );
    }
    page.on('close', () => pages.delete(id) && tell({ t: 'user-close', id }));
    page.once('domcontentloaded', () => tell({ t: 'win-event', id, name: 'ready-to-show' }));
    page.on('load', () => tell({ t: 'wc-event', id, name: 'did-finish-load' }));
    return page;
  };
  const expected = new Map<number, string>();
  const opening = new Map<number, Promise<Page>>();
  const on: Record<string, (m: Wire) => Promise<unknown> | unknown> = {
    new: (m) => void opening.set(m.id, open(m.id, m['options'] as never)),
    load: async (m) => {
      const page = await opening.get(m.id);
      expected.set(m.id, new URL(toPage(m['url'], schemes)).href);
      await page?.goto(toPage(m['url'], schemes));
      if (page && !first) {
        first = page;
        for (const f of firsts) f(page);
      }
    },
    send: (m) =>
      pages
        .get(m.id)
        ?.evaluate((x) => (globalThis as unknown as { __standinDeliver(x: unknown): void }).__standinDeliver(x), {
          channel: m['channel'],
          args: m['args'],
        } as unknown),
    pdf: async (m) => {
      const p = m['opts'] as {
        pageSize?: string;
        landscape?: boolean;
        printBackground?: boolean;
        displayHeaderFooter?: boolean;
        headerTemplate?: string;
        footerTemplate?: string;
        generateTaggedPDF?: boolean;
      };
      return new Uint8Array(
        (await pages.get(m.id)?.pdf({
          format: p.pageSize ?? 'Letter',
          landscape: p.landscape ?? false,
          printBackground: p.printBackground ?? false,
          displayHeaderFooter: p.displayHeaderFooter ?? false,
          headerTemplate: p.headerTemplate ?? '',
          footerTemplate: p.footerTemplate ?? '',
          tagged: p.generateTaggedPDF ?? false,
        })) ?? [],
      );
    },
    choose: async (m) => {
      const page = pages.get(m.id);
      if (!page) return [];
      const cdp = await page.context().newCDPSession(page);
      const filters = (m['options']?.filters ?? []) as { extensions: string[] }[];
      const accept = filters.flatMap((f) => f.extensions.map((e) => `.${e}`)).join(',');
      const { result } = await cdp.send('Runtime.evaluate', {
        userGesture: true,
        awaitPromise: true,
        expression: `new Promise((ok) => {
          const i = Object.assign(document.createElement('input'), { type: 'file', accept: ${JSON.stringify(accept)} });
          i.addEventListener('change', () => ok(i.files[0] ?? null));
          i.addEventListener('cancel', () => ok(null));
          i.click();
        })`,
      });
      if (!result.objectId) return [];
      const { path } = (await cdp.send(
        'DOM.getFileInfo' as never,
        { objectId: result.objectId } as never,
      )) as unknown as { path: string };
      await cdp.detach();
      return [path];
    },
    shot: async (m) => new Uint8Array((await pages.get(m.id)?.screenshot()) ?? []),
    js: (m) => pages.get(m.id)?.evaluate(m['code'] as string),
    close: (m) => {
      const p = pages.get(m.id);
      pages.delete(m.id);
      return p?.close();
    },
    record: (m) => void records.push({ name: m['name'], args: m['args'] }),
    scheme: (m) => void schemes.add(m['scheme']),
    quit: () => undefined,
  };
  child.on('message', (raw) => {
    const m = raw as Wire & { t: string; seq?: number };
    if (m.t === 'loaded') return tell({ t: 'ready' }); // as Electron does: no 'ready' before the entry module has been evaluated
    if (m.t === 'reply') {
      const w = waiting.get(m.seq as number);
      waiting.delete(m.seq as number);
      if (m['error'] === undefined) w?.ok(m['value']);
      else w?.fail(new Error(m['error']));
      return;
    }
    Promise.resolve(on[m.t]?.(m)).then(
      (value) => m.seq && m.t !== 'new' && tell({ t: 'reply', seq: m.seq, value }),
      (e: Error) => (m.seq ? tell({ t: 'reply', seq: m.seq, error: e.message }) : console.error('stand-in', m.t, e)),
    );
  });
  return {
    kind: 'standin',
    records,
    firstWindow: () =>
      first
        ? Promise.resolve(first)
        : Promise.race([
            new Promise<Page>((ok) => void firsts.push(ok)),
            gone.then((c): never => {
              throw new Error(`app exited ${c} before its first window`);
            }),
          ]),
    evaluate: (fn, arg) => ask({ t: 'eval', fn: fn.toString(), arg }),
    async close() {
      tell({ t: 'eval', seq: ++seq, fn: '({ app }) => app.quit()' });
      await gone;
      await (browser ? browser.close() : context?.close());
    },
  };
}
