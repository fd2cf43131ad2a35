// A window's page in Chromium: its requests go to the program, its preload runs in a world of its own.
import { randomUUID } from 'node:crypto';
import { readFileSync } from 'node:fs';
import type { BrowserContext, CDPSession, Frame, Page, Request, Route } from 'playwright-core';
import type { Line } from './line.ts';

/** The very text that runs in the page's two worlds. */
export const { pack, unpack } = (await import(new URL('./codec.js', import.meta.url).href)) as {
  readonly pack: (value: unknown) => unknown;
  readonly unpack: (packed: unknown) => unknown;
};

const here = (file: string) => readFileSync(new URL(file, import.meta.url), 'utf8');

/** Longest piece of text that goes to the page at once: Chromium takes no message over 100 MB. */
const PIECE = 1 << 24;

/** The program's own schemes, which Chromium does not know, as addresses that it does. */
export class Addresses {
  readonly #schemes = new Set<string>();
  readonly add = (scheme: string) => void this.#schemes.add(scheme);

  toChromium(address: string): string {
    const { protocol, host, pathname, search, hash } = new URL(address);
    const scheme = protocol.slice(0, -1);
    return this.#schemes.has(scheme)
      ? `https://${host}.${scheme}.invalid${pathname}${search}${hash}`
      : new URL(address).href;
  }

  toProgram(address: string): string {
    return address.replace(/^https:\/\/([^/]+)\.([a-z][a-z0-9+.-]*)\.invalid/, '$2://$1');
  }

  isOwn(address: string): boolean {
    return this.#schemes.has(new URL(address).protocol.slice(0, -1));
  }
}

interface Host {
  readonly id: number;
  readonly page: Page;
  readonly line: Line;
  readonly addresses: Addresses;
}

export interface Hosted {
  readonly page: Page;
  /** Goes where the program sends the page: the one navigation that nobody is asked about. */
  readonly load: (address: string) => Promise<void>;
  /** The same to where it was sent before. */
  readonly reload: () => Promise<void>;
  readonly send: (channel: string, words: readonly unknown[]) => Promise<void>;
}

/** Puts a fresh page under the program's rule. preload: its file, if it has one. */
export async function hostPage(host: Host & { readonly preload: string | null }): Promise<Hosted> {
  const { id, page, line, addresses } = host;
  const context = page.context();
  const going = { to: '' };
  context.on('page', (other) => void (other !== page && other.close()));
  await context.route(
    '**/*',
    (route) => decide({ ...host, route, going }).catch(() => route.abort().catch(() => {})), // the program has ended meanwhile
  );
  const wire = host.preload === null ? null : await isolate(host, readFileSync(host.preload, 'utf8'));
  page.once('domcontentloaded', () => line.tell('window', id, 'ready-to-show'));
  page.on('load', () => line.tell('contents', id, 'did-finish-load'));
  page.on('download', (download) => {
    line.tell('download', download.url());
    void download.cancel();
  });
  let sent = '';
  const go = async (address: string) => {
    sent = going.to = address;
    await page.goto(address);
    await wire?.check();
  };
  return {
    page,
    load: (address) => go(addresses.toChromium(address)),
    reload: () => go(sent),
    send: async (channel, words) => wire?.hear({ channel, words }),
  };
}

/** The frame that wants to go somewhere; null for a new window, whose first request comes before its frame. */
function frameOf(request: Request): Frame | null {
  try {
    return request.frame();
  } catch {
    return null;
  }
}

async function decide(asked: Host & { readonly route: Route; readonly going: { to: string } }): Promise<void> {
  const { id, page, line, addresses, route } = asked;
  const request = route.request();
  const url = addresses.toProgram(request.url());
  if (request.isNavigationRequest()) {
    const frame = frameOf(request);
    const stop = () => route.abort('aborted'); // any other code would commit Chromium's own error page
    if (frame === null || frame.page() !== page) {
      line.tell('new-window', id, url);
      return stop();
    }
    const isMain = frame.parentFrame() === null;
    const isSent = isMain && request.url() === asked.going.to;
    if (isSent) asked.going.to = '';
    if (!isSent && (await line.call<boolean>('navigate', id, url, isMain))) return stop();
  }
  if (await line.call<boolean>('request', url, request.resourceType())) return route.abort('blockedbyclient');
  if (!addresses.isOwn(url)) return route.continue();
  const answer = await line.call<{ status: number; headers: Record<string, string>; body: Uint8Array }>(
    'fetch',
    url,
    request.method(),
  );
  return route.fulfill({ ...answer, body: Buffer.from(answer.body) });
}

interface Wire {
  readonly hear: (message: object) => Promise<void>;
  readonly check: () => Promise<void>;
}

/** Runs the preload in a world of its own, and carries its messages. */
async function isolate({ id, page, line, addresses }: Host, preload: string): Promise<Wire> {
  const [speak, hear, ...sides] = Array.from({ length: 4 }, () => `s${randomUUID().replaceAll('-', '')}`);
  const names = { page: sides[0], preload: sides[1] };
  const common = `${here('./codec.js').replaceAll('export function', 'function')}\n${here('./worlds.js')}`;
  const cdp = await page.context().newCDPSession(page);
  const world = await watchWorld(cdp);
  await cdp.send('Page.enable');
  await cdp.send('Runtime.addBinding', { name: speak as string, executionContextName: 'preload' });
  // In this order: what the page's side does not yet hear would be lost.
  await cdp.send('Page.addScriptToEvaluateOnNewDocument', {
    source: `if (window === window.top) (() => {${common}\npageWorld(${JSON.stringify({ names })});})();`,
  });
  await cdp.send('Page.addScriptToEvaluateOnNewDocument', {
    worldName: 'preload',
    source: `if (window === window.top) (() => {${common}\npreloadWorld({ ...${JSON.stringify({ names, speak, hear })}, preload: (require, module = {}, exports = {}) => {${preload}\n} });})();`,
  });
  const hearing = async (message: object) => {
    const text = JSON.stringify(pack(message));
    const executionContextId = await world.current();
    const sent: Promise<unknown>[] = []; // all pieces at once, so that no other message comes between
    for (let start = 0; start < text.length; start += PIECE)
      sent.push(
        cdp.send('Runtime.callFunctionOn', {
          executionContextId,
          functionDeclaration: `function (piece, isLast) { ${hear}(piece, isLast); }`,
          arguments: [{ value: text.slice(start, start + PIECE) }, { value: start + PIECE >= text.length }],
        }),
      );
    await Promise.all(sent);
  };
  cdp.on('Runtime.bindingCalled', async ({ name, payload }) => {
    if (name !== speak) return;
    const { turn, channel, words } = unpack(JSON.parse(payload)) as { turn: number; channel: string; words: unknown[] };
    const url = addresses.toProgram(page.url());
    const answered = await line.call('invoke', id, url, channel, words).then(
      (value) => ({ turn, value }),
      (error: Error) => ({ turn, error: error.message }),
    );
    await hearing(answered).catch(() => {}); // the page went on without waiting for its answer
  });
  return {
    hear: (message) => hearing(message).catch(() => {}),
    check: async () => {
      const { result } = await cdp.send('Runtime.evaluate', {
        contextId: await world.current(),
        expression: `typeof ${hear}`,
      });
      if (result.value !== 'function') throw new Error('stand-in: the preload did not run in its world');
    },
  };
}

/** The number of the preload's world in the page that stands now, which changes with every page. */
async function watchWorld(cdp: CDPSession): Promise<{ current: () => Promise<number> }> {
  let fresh = Promise.withResolvers<number>();
  cdp.on('Runtime.executionContextCreated', ({ context }) => {
    const { isDefault } = (context.auxData ?? {}) as { isDefault?: boolean };
    if (context.name === 'preload' && isDefault === false) fresh.resolve(context.id);
  });
  cdp.on('Runtime.executionContextsCleared', () => {
    fresh = Promise.withResolvers();
  });
  await cdp.send('Runtime.enable');
  return { current: () => fresh.promise };
}

/** Chromium's own chooser for a file, with its path: a page alone is never told it. */
export async function chooseFile(page: Page, endings: readonly string[]): Promise<string[]> {
  const cdp = await page.context().newCDPSession(page);
  const accept = endings.filter((ending) => ending !== '*').map((ending) => `.${ending}`);
  const { result } = await cdp.send('Runtime.evaluate', {
    userGesture: true,
    awaitPromise: true,
    expression: `new Promise((answer) => {
      const field = Object.assign(document.createElement('input'), { type: 'file', accept: ${JSON.stringify(accept.length < endings.length ? '' : accept.join(','))} });
      field.addEventListener('change', () => answer(field.files[0] ?? null));
      field.addEventListener('cancel', () => answer(null));
      field.click();
    })`,
  });
  if (!result.objectId) return [];
  const { path } = await cdp.send('DOM.getFileInfo', { objectId: result.objectId });
  await cdp.detach();
  return [path];
}

/** Puts text, and the same as HTML, on the machine's clipboard by way of the page. */
export async function copyBy(
  context: BrowserContext,
  page: Page,
  kinds: Readonly<Record<string, string>>,
): Promise<void> {
  await context.grantPermissions(['clipboard-write', 'clipboard-read']);
  await page.evaluate(
    (texts) =>
      navigator.clipboard.write([
        new ClipboardItem(
          Object.fromEntries(Object.entries(texts).map(([type, text]) => [type, new Blob([text], { type })])),
        ),
      ]),
    kinds,
  );
}
