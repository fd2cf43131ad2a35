import { join, sep } from 'node:path';
import { fileOf, mayGoTo, mayLoad, ORIGIN, PAGE_RIGHTS, POLICY, serveFrom, speaker, switches } from '@main/security';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const folder = join(import.meta.dirname, '../../src-renderer');

describe('the program’s own scheme', () => {
  it.each([
    ['a plain file', `${ORIGIN}/index.html`, `${folder}${sep}index.html`],
    ['a file in a folder', `${ORIGIN}/theme/page.css`, join(folder, 'theme/page.css')],
    ['another host', 'app://elsewhere/index.html', null],
    ['another scheme', 'file:///etc/passwd', null],
    ['no address at all', 'index.html', null],
    ['steps up, which the address drops', `${ORIGIN}/../main.ts`, `${folder}${sep}main.ts`],
    ['steps up in disguise', `${ORIGIN}/%2e%2e/src-main/main.ts`, join(folder, 'src-main/main.ts')],
    ['steps up behind escaped slashes', `${ORIGIN}/..%2f..%2fpackage.json`, null],
    [
      'steps up behind backslashes',
      `${ORIGIN}/..%5c..%5cpackage.json`,
      process.platform === 'win32' ? null : join(folder, '..\\..\\package.json'),
    ],
    ['a zero byte', `${ORIGIN}/index.html%00.png`, null],
    ['a broken escape', `${ORIGIN}/%E0%A4%A`, null],
    ['the folder itself, which holds no bytes to give', `${ORIGIN}/`, `${folder}${sep}`],
  ])('%s', (_, address, file) => {
    expect(fileOf(address, folder)).toBe(file);
  });

  it('never leads out of its folder, whatever the path is made of', () => {
    const pieces = fc.array(
      fc.constantFrom('..', '%2e%2e', '/', '%2f', '\\', '%5c', 'etc', 'passwd', '.', '%00', '//'),
      {
        maxLength: 12,
      },
    );
    fc.assert(
      fc.property(pieces, (path) => {
        const file = fileOf(`${ORIGIN}/${path.join('')}`, folder);
        expect(file === null || file.startsWith(folder + sep)).toBe(true);
      }),
    );
  });

  it('answers with the content policy, whatever it answers', async () => {
    const serve = serveFrom(folder);
    for (const [path, status] of [
      ['/index.html', 200],
      ['/none.html', 404],
      ['/', 404],
      ['/..%2fpackage.json', 403],
    ] as const) {
      const answer = await serve(new Request(`${ORIGIN}${path}`));
      expect(answer.status).toBe(status);
      expect(answer.headers.get('content-security-policy')).toBe(POLICY);
      expect(answer.headers.get('x-content-type-options')).toBe('nosniff');
    }
  });

  it('only gives: it takes nothing', async () => {
    const answer = await serveFrom(folder)(new Request(`${ORIGIN}/index.html`, { method: 'POST', body: 'x' }));
    expect(answer.status).toBe(405);
  });

  it('has a policy that lets no script in but its own files, and nothing out', () => {
    const rules = new Map(POLICY.split('; ').map((rule) => [rule.split(' ')[0], rule.split(' ').slice(1)]));
    expect(rules.get('default-src')).toEqual(["'none'"]);
    expect(rules.get('script-src')).toEqual(["'self'"]);
    for (const closed of ['connect-src', 'base-uri', 'form-action', 'frame-ancestors', 'object-src'])
      expect(rules.get(closed)).toEqual(["'none'"]);
    expect(POLICY).not.toMatch(/unsafe-eval|https?:|\*/);
  });
});

describe('what the page may ask for', () => {
  it.each([
    [`${ORIGIN}/index.js`, null, true],
    ['data:image/png;base64,AA', null, true],
    ['https://example.org/', null, false],
    ['http://localhost:5173/x', null, false],
    ['http://localhost:5173/x', 'http://localhost:5173', true],
    ['ws://localhost:5173/', 'http://localhost:5173', true],
    ['http://localhost:9999/x', 'http://localhost:5173', false],
    ['file:///etc/passwd', null, false],
    ['app://elsewhere/x', null, false],
    ['chrome://settings', null, false],
    ['no address', null, false],
  ])('%s while developing at %s: %s', (address, development, answer) => {
    expect(mayLoad(address, development)).toBe(answer);
  });

  it('leads nowhere, but to its own server while developing', () => {
    expect(mayGoTo(`${ORIGIN}/index.html`, null)).toBe(false);
    expect(mayGoTo('https://example.org/', null)).toBe(false);
    expect(mayGoTo('http://localhost:5173/', 'http://localhost:5173')).toBe(true);
    expect(mayGoTo('http://localhost:5174/', 'http://localhost:5173')).toBe(false);
  });

  it('looks up no name, and none but the page server’s while developing', () => {
    expect(new Map(switches(null)).get('host-resolver-rules')).toBe('MAP * ~NOTFOUND');
    expect(new Map(switches('http://localhost:5173/')).get('host-resolver-rules')).toBe(
      'MAP * ~NOTFOUND, EXCLUDE localhost',
    );
  });

  it('runs with the fewest rights that Electron knows', () => {
    expect(PAGE_RIGHTS).toEqual({
      contextIsolation: true,
      sandbox: true,
      nodeIntegration: false,
      nodeIntegrationInSubFrames: false,
      nodeIntegrationInWorker: false,
      webSecurity: true,
      allowRunningInsecureContent: false,
      webviewTag: false,
      navigateOnDragDrop: false,
      spellcheck: false,
    });
  });
});

describe('who speaks to the main process', () => {
  it.each([
    ['the page itself', { url: `${ORIGIN}/index.html`, parent: null }, ORIGIN],
    ['a page from elsewhere', { url: 'https://steelyard/index.html', parent: null }, 'https://steelyard'],
    ['a page whose host begins like ours', { url: 'app://steelyard.evil/', parent: null }, 'app://steelyard.evil'],
    ['a frame inside the page, though it shows our own file', { url: `${ORIGIN}/index.html`, parent: {} }, 'a frame'],
    ['a frame that is gone', null, 'nobody'],
    ['an empty frame', { url: '', parent: null }, 'nobody'],
  ])('%s', (_, frame, origin) => {
    expect(speaker(frame)).toBe(origin);
  });
});
