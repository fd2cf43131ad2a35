import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { copyFileSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { builtinModules } from 'node:module';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { Answers, Ask, Asked, Told } from '@core/protocol/bridge';
import type { Outcome } from '@core/protocol/outcome';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it, onTestFinished } from 'vitest';
import { type AppHandle, launchApp } from '../standin/launch.ts';

/** Asks by the page's own door. */
async function ask<Q extends Asked>(page: Page, question: Q, payload: Ask<Q>): Promise<Answers[Q]> {
  const outcome = (await page.evaluate(([name, word]) => window.steelyard.ask(name as string, word), [
    question,
    payload,
  ] as const)) as Outcome<Answers[Q]>;
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

const heardBy = (page: Page) => page.evaluate(() => (window as never as { heard: Told[] }).heard);

/** Lets the page keep what it is told. */
async function listen(page: Page): Promise<void> {
  await page.evaluate(() => {
    const heard: unknown[] = [];
    Object.assign(window, { heard });
    window.steelyard.listen((told) => heard.push(told));
  });
}

async function until(what: () => Promise<boolean> | boolean, patience = 15_000): Promise<void> {
  const end = Date.now() + patience;
  while (!(await what())) {
    if (Date.now() > end) throw new Error(`not within ${patience} ms: ${what}`);
    await new Promise((go) => setTimeout(go, 25));
  }
}

function folder(): string {
  const path = mkdtempSync(join(tmpdir(), 'steelyard-shell-'));
  onTestFinished(() => rmSync(path, { recursive: true, force: true }));
  return path;
}

/** A launch of one's own, ended with the test. */
async function launch(options: Parameters<typeof launchApp>[0] = {}): Promise<{ app: AppHandle; page: Page }> {
  const app = await launchApp(options);
  onTestFinished(() => app.close());
  return { app, page: await app.firstWindow() };
}

const demoPlan = async (page: Page) => {
  const project = await ask(page, 'project.demo', {});
  return { project, planId: project.plans[0]?.planId as number };
};

describe('the window of the built program', () => {
  let app: AppHandle;
  let page: Page;
  const errors: string[] = [];
  /** What the program is known to have refused, since the last look. */
  const recorded = (name: string) => app.records.filter((one) => one.name === name).map(({ args }) => args);

  beforeAll(async () => {
    app = await launchApp();
    page = await app.firstWindow();
    page.on('pageerror', (error) => errors.push(error.message));
  });
  afterAll(() => app?.close());

  it('gives the page one frozen door, and neither Node nor anything of the preload’s', async () => {
    expect(
      await page.evaluate(() => ({
        node: ['require', 'process', 'Buffer', 'module', 'global', 'electron', 'ipcRenderer'].filter(
          (name) => name in window,
        ),
        door: Object.keys(window.steelyard),
        isFrozen: Object.isFrozen(window.steelyard),
        strange: Object.getOwnPropertyNames(window).filter((name) => /^s[0-9a-f]{32}$/.test(name)),
      })),
    ).toEqual({ node: [], door: ['ask', 'listen'], isFrozen: true, strange: [] });
  });

  it('shows the door nothing that could be replaced under it', async () => {
    const answer = await page.evaluate(async () => {
      try {
        (window.steelyard as { ask: unknown }).ask = () => 'mine';
      } catch {
        // strict code throws, loose code is ignored
      }
      return window.steelyard.ask('start.look', {});
    });
    expect(answer).toMatchObject({ ok: true });
  });

  it('carries bytes whole in both ways', async () => {
    const text = 'cell,mean,size\na,1.5,10\nb,2.5,20\n';
    const preview = await page.evaluate(
      (given) => window.steelyard.ask('data.take', { name: 'cells.csv', bytes: new TextEncoder().encode(given) }),
      text,
    );
    expect(preview).toMatchObject({
      ok: true,
      value: { sha256: createHash('sha256').update(text).digest('hex'), rows: 2 },
    });

    const { planId } = await demoPlan(page);
    const pages = await page.evaluate(async (id) => {
      const answer = (await window.steelyard.ask('report.pages', { planId: id, edition: null })) as {
        ok: true;
        value: { pdf: Uint8Array };
      };
      const { pdf } = answer.value;
      const hash = new Uint8Array(await crypto.subtle.digest('SHA-256', pdf as Uint8Array<ArrayBuffer>));
      return { isBytes: pdf instanceof Uint8Array, head: String.fromCharCode(...pdf.slice(0, 5)), hash: [...hash] };
    }, planId);
    expect(pages).toMatchObject({ isBytes: true, head: '%PDF-' });
    const { value } = (await page.evaluate(
      (id) => window.steelyard.ask('report.pages', { planId: id, edition: null }),
      planId,
    )) as {
      value: { pdf: Uint8Array };
    };
    expect(createHash('sha256').update(value.pdf).digest('hex')).toBe(Buffer.from(pages.hash).toString('hex'));
  });

  it('refuses, as outcomes, a question that nobody knows and a payload of another shape', async () => {
    const codes = await page.evaluate(async () => {
      const asked: (readonly [string, unknown])[] = [
        ['constructor', {}],
        ['__proto__', {}],
        ['start.look', { more: 1 }],
        ['start.look', null],
        ['data.take', { name: 'a', bytes: 'not bytes' }],
        ['project.open', { file: 5 }],
      ];
      const answers = await Promise.all(asked.map(([name, word]) => window.steelyard.ask(name, word)));
      return answers.map((answer) => (answer as { problems?: { code: string }[] }).problems?.[0]?.code);
    });
    expect(codes).toEqual(['unknown-kind', 'unknown-kind', 'wrong-type', 'wrong-type', 'wrong-type', 'wrong-type']);
  });

  it('takes no path from the page on trust', async () => {
    const answer = await page.evaluate(() => window.steelyard.ask('project.open', { file: '/etc/passwd' }));
    expect(answer).toMatchObject({ ok: false, problems: [{ code: 'no-project' }] });
  });

  it('clones what crosses, so that a live proxy is refused before it leaves the page', async () => {
    expect(
      await page.evaluate(async () => {
        try {
          await window.steelyard.ask('start.look', new Proxy({}, {}));
          return 'taken';
        } catch {
          return 'refused';
        }
      }),
    ).toBe('refused');
  });

  it('lets in no script, frame, image, worker or connection from anywhere else', async () => {
    const broken = await page.evaluate(async () => {
      const found = new Set<string>();
      document.addEventListener('securitypolicyviolation', (event) => found.add(event.effectiveDirective));
      const add = (tag: string, facts: object) =>
        document.body.append(Object.assign(document.createElement(tag), facts));
      add('script', { textContent: 'window.reached = 1' });
      add('script', { src: 'https://example.org/x.js' });
      add('iframe', { src: 'https://example.org/' });
      add('object', { data: 'https://example.org/' });
      add('img', { src: 'https://example.org/x.png' });
      add('link', { rel: 'stylesheet', href: 'https://example.org/x.css' });
      add('base', { href: 'https://example.org/' });
      // Not at once: what a test says by itself is spared the policy, what it leaves behind is not.
      await new Promise((go) => setTimeout(go, 0));
      try {
        // biome-ignore lint/security/noGlobalEval: to see it refused
        globalThis.eval('window.reached = 2');
      } catch {
        found.add('eval');
      }
      await fetch('https://example.org/').catch(() => found.add('fetch'));
      try {
        new WebSocket('wss://example.org/').addEventListener('error', () => found.add('socket'));
      } catch {
        found.add('socket');
      }
      new Worker(URL.createObjectURL(new Blob(['1']))).addEventListener('error', () => found.add('worker'));
      await new Promise((go) => setTimeout(go, 300));
      for (const stray of document.querySelectorAll(
        'body > script, body > iframe, body > object, body > img, body > link, base',
      ))
        stray.remove();
      return { found: [...found], reached: 'reached' in window };
    });
    expect(broken.reached).toBe(false);
    for (const directive of [
      'script-src-elem',
      'frame-src',
      'object-src',
      'img-src',
      'style-src-elem',
      'base-uri',
      'connect-src',
      'eval',
      'fetch',
    ])
      expect(broken.found).toContain(directive);
    expect(broken.found.some((one) => one.startsWith('worker'))).toBe(true);
  });

  it('finds the page no way out past its policy either: a call between browsers gets no address to be reached at', async () => {
    const candidates = await page.evaluate(async () => {
      const peer = new RTCPeerConnection({ iceServers: [{ urls: 'stun:stun.example.org' }] });
      peer.createDataChannel('out');
      await peer.setLocalDescription(await peer.createOffer());
      await new Promise((go) => setTimeout(go, 800));
      return (peer.localDescription?.sdp.match(/a=candidate/g) ?? []).length;
    });
    expect(candidates).toBe(0);
  });

  it('goes nowhere and opens nothing, whatever the page tries', async () => {
    const at = page.url();
    await page.evaluate(() => {
      window.open('https://example.org/opened');
      const link = Object.assign(document.createElement('a'), { href: 'https://example.org/linked', target: '_blank' });
      document.body.append(link);
      link.click();
      link.remove();
    });
    await page.evaluate(() => void (location.href = 'https://example.org/gone'));
    // Each navigation is judged before the next is tried: one that overtakes another would leave nothing to judge.
    await until(() => app.kind === 'electron' || recorded('navigate').length >= 1);
    await page.evaluate(() => void (location.href = 'app://elsewhere/index.html'));
    expect(page.url()).toBe(at);
    expect(await page.evaluate(() => 'steelyard' in window)).toBe(true);
    if (app.kind === 'electron') return;
    expect(recorded('navigate')).toContainEqual(['https://example.org/gone', 'refused']);
    expect(recorded('navigate').every(([, how]) => how === 'refused')).toBe(true);
    expect(recorded('new-window').map(([url]) => url)).toEqual([
      'https://example.org/opened',
      'https://example.org/linked',
    ]);
    expect(recorded('new-window').every(([, how]) => how === 'deny')).toBe(true);
    expect(page.context().pages()).toHaveLength(1);
  });

  it('saves nothing behind the researcher’s back', async () => {
    await page.evaluate(() => {
      const link = Object.assign(document.createElement('a'), {
        href: URL.createObjectURL(new Blob(['x'])),
        download: 'x.txt',
      });
      document.body.append(link);
      link.click();
      link.remove();
    });
    if (app.kind === 'electron') return;
    await until(() => recorded('download').length > 0);
    expect(recorded('download').map(([, how]) => how)).toEqual(['refused']);
  });

  it('grants no permission of any kind, fetches no dictionary and looks up no name', () => {
    if (app.kind === 'electron') return expect(app.kind).toBe('electron');
    const decisions = [
      ...recorded('permission-asked'),
      ...recorded('permission-checked'),
      ...recorded('permission-device'),
    ];
    expect(decisions.length).toBeGreaterThan(10);
    expect(decisions.filter(([, granted]) => granted !== false)).toEqual([]);
    expect(recorded('session.setSpellCheckerEnabled')).toEqual([[false]]);
    expect(recorded('app.commandLine.appendSwitch')).toContainEqual(['host-resolver-rules', 'MAP * ~NOTFOUND']);
    expect(recorded('app.enableSandbox')).toHaveLength(1);
    expect(recorded('webContents.setWebRTCIPHandlingPolicy')).toEqual([['disable_non_proxied_udp']]);
    expect(recorded('protocol.registerSchemesAsPrivileged')).toEqual([
      [[{ scheme: 'app', privileges: { standard: true, secure: true } }]],
    ]);
    const [made] = recorded('BrowserWindow')[0] as [{ webPreferences: object }];
    expect(made.webPreferences).toMatchObject({
      contextIsolation: true,
      sandbox: true,
      nodeIntegration: false,
      webSecurity: true,
      spellcheck: false,
      navigateOnDragDrop: false,
    });
  });

  it('is called after the open project, without its folder', async () => {
    const title = () => app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]?.getTitle() ?? '', null);
    const { project } = await demoPlan(page);
    expect(await title()).toBe(`${project.name} – Steelyard`);
    expect(await title()).not.toMatch(/[/\\]/);
    await page.evaluate(() => void (document.title = 'something else'));
    expect(await title()).toBe(`${project.name} – Steelyard`);
    await ask(page, 'project.close', {});
    expect(await title()).toBe('Steelyard');
  });

  it('has a menu that orders the page about, and offers only what is in force', async () => {
    const isOn = (id: string) =>
      app.evaluate(({ Menu }, which) => Menu.getApplicationMenu()?.getMenuItemById(which)?.enabled ?? null, id);
    await listen(page);
    expect([await isOn('plan.undo'), await isOn('report.freeze'), await isOn('project.open')]).toEqual([
      false,
      false,
      true,
    ]);

    const { project, planId } = await demoPlan(page);
    const { undo } = project;
    expect([await isOn('plan.undo'), await isOn('plan.redo'), await isOn('report.freeze')]).toEqual([
      undo !== null,
      false,
      true,
    ]);
    const { plan } = project.plans[0] as { plan: { title: string } };
    await ask(page, 'plan.change', {
      planId,
      action: 'retitle',
      plan: { ...plan, title: 'Another title' },
      inputs: null,
    });
    expect(await isOn('plan.undo')).toBe(true);
    await ask(page, 'plan.undo', {});
    expect([await isOn('plan.undo'), await isOn('plan.redo')]).toEqual([undo !== null, true]);

    await app.evaluate(({ Menu }) => Menu.getApplicationMenu()?.getMenuItemById('go.trail')?.click(), null);
    await until(async () =>
      (await heardBy(page)).some((told) => told.kind === 'command' && told.command === 'go.trail'),
    );
  });

  it('follows the system between light and dark, the ground under the page with it', async () => {
    const isDark = () => page.evaluate(() => matchMedia('(prefers-color-scheme: dark)').matches);
    const ground = () => page.evaluate(() => getComputedStyle(document.body).backgroundColor);
    const asNumbers = (colour: unknown) =>
      `rgb(${[1, 3, 5].map((start) => Number.parseInt(String(colour).slice(start, start + 2), 16)).join(', ')})`;
    const [made] = (recorded('BrowserWindow')[0] ?? [{}]) as [{ backgroundColor?: string }];
    if (app.kind === 'standin') expect(await ground()).toBe(asNumbers(made.backgroundColor));
    await app.evaluate(({ nativeTheme }) => void (nativeTheme.themeSource = 'dark'), null);
    await until(isDark);
    if (app.kind === 'standin')
      expect(await ground()).toBe(asNumbers(recorded('BrowserWindow.setBackgroundColor').at(-1)?.[0]));
    await app.evaluate(({ nativeTheme }) => void (nativeTheme.themeSource = 'light'), null);
    await until(async () => !(await isDark()));
  });

  it('puts what is copied on the clipboard as text and as HTML at once', async () => {
    await ask(page, 'keep.copy', { text: 'a\t1', html: '<table><tr><td>a<td>1</table>' });
    const copied = await app.evaluate(async ({ clipboard }) => {
      const [item] = await clipboard.read();
      if (item === undefined) return [];
      return Promise.all(item.types.map(async (type) => [type, await ((await item.getType(type)) as Blob).text()]));
    }, null);
    expect(copied).toContainEqual(['text/plain', 'a\t1']);
    expect(copied).toContainEqual(['text/html', '<table><tr><td>a<td>1</table>']);
  });

  it('comes back with its project where its page breaks down', async () => {
    const { project } = await demoPlan(page);
    await page.evaluate(() => void Object.assign(window, { before: true }));
    await app.evaluate(
      ({ BrowserWindow }) =>
        void BrowserWindow.getAllWindows()[0]?.webContents.emit('render-process-gone', {}, { reason: 'crashed' }),
      null,
    );
    await until(() => page.evaluate(() => !('before' in window) && 'steelyard' in window).catch(() => false));
    expect((await ask(page, 'start.look', {})).project?.file).toBe(project.file);
  });

  it('left no error on its own', () => {
    expect(errors).toEqual([]);
  });
});

describe('the life of the program', () => {
  it('gives up, in words, a page that breaks down twice in a row, and ends', async () => {
    const { app, page } = await launch();
    await demoPlan(page);
    const breakDown = () =>
      app.evaluate(
        ({ BrowserWindow }) =>
          void BrowserWindow.getAllWindows()[0]?.webContents.emit('render-process-gone', {}, { reason: 'oom' }),
        null,
      );
    await breakDown();
    await breakDown();
    expect(await app.ended).toBe(0);
    expect(app.records.filter(({ name }) => name === 'dialog.showErrorBox').map(({ args }) => args[1])).toEqual([
      expect.stringContaining('Everything accepted so far is in the project file'),
    ]);
  });

  it('runs once: a second start hands over the project that it was asked for, and goes', async () => {
    const { app, page } = await launch();
    const { project } = await demoPlan(page);
    const other = join(folder(), 'Other.steelyard');
    copyFileSync(project.file, other);
    await listen(page);
    expect(await page.evaluate((file) => window.steelyard.ask('project.open', { file }), other)).toMatchObject({
      ok: false,
    });

    const second = await launchApp({ profile: app.profile, words: [other] });
    onTestFinished(() => second.close());
    expect(await second.ended).toBe(0);
    await until(async () => (await heardBy(page)).some((told) => told.kind === 'offered' && told.file === other));
    expect(app.records.some(({ name }) => name === 'BrowserWindow.focus')).toBe(true);
    expect((await ask(page, 'project.open', { file: other }))?.file).toBe(other);
  });

  it('closes during a fit without losing a word: the draft of the last moment is in the file, which opens whole', async () => {
    const { app, page } = await launch();
    const { project, planId } = await demoPlan(page);
    const file = join(folder(), 'Kept.steelyard');
    await page.evaluate(() =>
      window.steelyard.listen((told) => {
        if ((told as Told).kind === 'leaving') void window.steelyard.ask('draft.keep', { text: 'last words' });
      }),
    );
    const { plan } = project.plans[0] as { plan: { title: string } };
    await ask(page, 'plan.change', {
      planId,
      action: 'retitle',
      plan: { ...plan, title: 'Changed last' },
      inputs: null,
    });
    await app.evaluate(({ BrowserWindow }) => void BrowserWindow.getAllWindows()[0]?.close(), null);
    expect(await app.ended).toBe(0);

    copyFileSync(project.file, file);
    const again = await launch({ words: [file] });
    const reopened = await ask(again.page, 'project.open', { file });
    expect(reopened?.draft).toBe('last words');
    expect(reopened?.plans[0]?.plan.title).toBe('Changed last');
    expect((await ask(again.page, 'trail.read', {})).problems).toEqual([]);
  });

  it('ends by itself when the window is gone without a word', async () => {
    const { app, page } = await launch();
    const { planId } = await demoPlan(page);
    await ask(page, 'fit.ask', { planId });
    await page.close();
    expect(await app.ended).toBe(0);
  });
});

describe('nothing leaves the machine', () => {
  const out = resolve('out/main');

  it('the built program takes no module of Node’s that could reach a network, nor Electron’s', () => {
    const taken = new Set<string>();
    for (const file of readdirSync(out).filter((name) => name.endsWith('.js'))) {
      const text = readFileSync(join(out, file), 'utf8');
      for (const [, name] of text.matchAll(/(?:from\s*|import\s*\(?\s*|require\s*\(\s*)["']([\w@:/.-]+)["']/g))
        taken.add(name as string);
      const electron = /import\s*\{([^}]*)\}\s*from\s*["']electron["']/.exec(text);
      for (const name of electron?.[1]?.split(',') ?? []) taken.add(`electron ${name.trim()}`);
      expect(text, file).not.toMatch(/\b(?:fetch|new (?:WebSocket|EventSource|XMLHttpRequest))\s*\(\s*["'`]https?:/);
    }
    const reaching = [
      'net',
      'tls',
      'http',
      'https',
      'http2',
      'dgram',
      'dns',
      'dns/promises',
      'inspector',
      'cluster',
      'child_process',
    ];
    expect(builtinModules).toContain('dgram');
    for (const name of reaching) {
      expect(taken).not.toContain(name);
      expect(taken).not.toContain(`node:${name}`);
    }
    for (const name of ['net', 'autoUpdater', 'crashReporter', 'shell', 'safeStorage'])
      expect(taken).not.toContain(`electron ${name}`);
    expect(taken).toContain('electron BrowserWindow');
  });

  const tracer = 'strace';
  const hasTracer = spawnSync(tracer, ['-V']).status === 0;
  it.runIf(hasTracer)(
    'a whole session opens no internet socket from the program’s own process, by the system’s account',
    async () => {
      const account = join(folder(), 'calls');
      const { app, page } = await launch({
        under: [tracer, '-f', '-qq', '-o', account, '-e', 'trace=socket,connect,bind,sendto'],
      });
      const text = 'cell,mean,size\na,1.5,10\nb,2.5,20\n';
      await page.evaluate(
        (given) => window.steelyard.ask('data.take', { name: 'cells.csv', bytes: new TextEncoder().encode(given) }),
        text,
      );
      const { planId } = await demoPlan(page);
      await ask(page, 'report.pages', { planId, edition: null });
      await ask(page, 'report.freeze', { planId, author: 'A. Author' });
      await ask(page, 'trail.read', {});
      await ask(page, 'project.close', {});
      await app.close();
      expect(await app.ended).toBe(0);
      const calls = readFileSync(account, 'utf8');
      expect(calls.match(/socket\(AF_INET6?,.*/g) ?? []).toEqual([]);
      expect(calls).not.toMatch(/sin6?_port/);
      // The account was kept: a program that does open one is seen.
      const seen = spawnSync(
        tracer,
        [
          '-f',
          '-qq',
          '-e',
          'trace=socket',
          process.execPath,
          '-e',
          'require("node:dgram").createSocket("udp4").bind(() => process.exit())',
        ],
        { encoding: 'utf8' },
      );
      expect(seen.stderr).toMatch(/socket\(AF_INET,/);
    },
  );
});
