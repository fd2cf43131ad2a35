import { join, sep } from 'node:path';
import { fileOf, mayLoad, ORIGIN, POLICY, serveFrom } from '@main/security';
import { describe, expect, it } from 'vitest';

const folder = join(import.meta.dirname, '../../src-renderer');

describe('the program’s own scheme', () => {
  it.each([
    ['a plain file', `${ORIGIN}/index.html`, `${folder}${sep}index.html`],
    ['a file in a folder', `${ORIGIN}/theme/page.css`, join(folder, 'theme/page.css')],
    ['another host', 'app://elsewhere/index.html', null],
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

  it('never leads out of its folder', () => {
    for (const path of [
      '/../../etc/passwd',
      '/..%2f..%2f..%2fetc%2fpasswd',
      '/%2e%2e%2f%2e%2e%2fetc',
      '//etc/passwd',
      '/a/../../b',
    ])
      expect(fileOf(`${ORIGIN}${path}`, folder) ?? `${folder}${sep}`).toContain(`${folder}${sep}`);
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
    }
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
  ])('%s while developing at %s: %s', (address, development, answer) => {
    expect(mayLoad(address, development)).toBe(answer);
  });
});
