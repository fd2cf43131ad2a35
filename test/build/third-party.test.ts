import { existsSync, globSync, readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { describe, expect, it } from 'vitest';

const root = resolve(import.meta.dirname, '../..');

/** The licences that the built program brings along, one part of the build after the other. */
const shipped = ['main', 'preload', 'renderer']
  .map((part) => resolve(root, 'out', part, 'third-party.txt'))
  .filter((file) => existsSync(file))
  .map((file) => readFileSync(file, 'utf8'))
  .join('\n');

const line = '-'.repeat(78);
const entries = shipped.split(/Steelyard holds the work of others, under their licences:\n\n/).flatMap((part) =>
  part
    .split(`\n${line}\n\n`)
    .filter((one) => one.trim() !== '')
    .map((one) => {
      const [titles = '', ...text] = one.split('\n\n');
      return { titles: titles.split('\n'), text: text.join('\n\n') };
    }),
);

/** Every package that the sources import, by name. */
function imported(): string[] {
  const files = globSync('src-*/**/*.{ts,svelte}', { cwd: root });
  const names = files.flatMap((file) =>
    [...readFileSync(resolve(root, file), 'utf8').matchAll(/(?:from|import)\s*\(?\s*'([a-z@][\w./@-]*)'/g)].map(
      ([, from]) => from as string,
    ),
  );
  const packages = names.filter((one) => !/^(node:|@core\/|@main\/|electron$)/.test(one));
  return [...new Set(packages.map((one) => one.split('/', one.startsWith('@') ? 2 : 1).join('/')))].sort();
}

const textOf = (name: string) => entries.filter(({ titles }) => titles.some((one) => one.startsWith(`${name} `)));

describe('the built program', () => {
  it('brings the licence of every package that its sources import, and of what those need', () => {
    const packages = imported();
    expect(packages).toEqual(expect.arrayContaining(['better-sqlite3', 'echarts', 'pdfjs-dist', 'pdfkit', 'valibot']));
    const needed = ['zrender', 'fontkit', 'svelte', 'DejaVu fonts'];
    for (const name of [...packages, ...needed]) expect(textOf(name), name).not.toEqual([]);
  });

  it('brings each licence whole, with the notices that Apache-2.0 asks for', () => {
    for (const { titles, text } of entries) expect(text.length, titles.join()).toBeGreaterThan(300);
    for (const name of ['pdfjs-dist', 'echarts'])
      expect(textOf(name).some(({ text }) => /Apache License\s+Version 2\.0/.test(text) && text.length > 9000)).toBe(
        true,
      );
    const notice = readFileSync(resolve(root, 'node_modules/echarts/NOTICE'), 'utf8').trim();
    expect(textOf('echarts').some(({ text }) => text.includes(notice))).toBe(true);
    expect(textOf('DejaVu fonts')[0]?.text).toContain('Bitstream');
  });

  it('names no folder of the machine that built it', () => {
    expect(shipped).not.toContain(root);
  });
});
