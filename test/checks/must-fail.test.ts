import { cpSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, dirname, join, resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { runTool } from './nets.ts';

const root = resolve(import.meta.dirname, '../..');
const folder = join(import.meta.dirname, 'must-fail');

/** Each wrong file's first line: where it belongs | the net | what the net must name. */
const wrong = readdirSync(folder).map((name) => {
  const text = readFileSync(join(folder, name), 'utf8');
  const head = /^(?:\/\/|<!--) (\S+) \| (\w+) \| (\S+)/.exec(text);
  if (!head) throw new Error(`${name} does not say where it belongs`);
  return { name, text, place: head[1] as string, net: head[2] as 'layers' | 'types' | 'lint', rule: head[3] as string };
});

let copy: string;
const outputs: Record<string, string> = {};

function put({ place, text }: (typeof wrong)[number]): void {
  mkdirSync(dirname(join(copy, place)), { recursive: true });
  writeFileSync(join(copy, place), text);
}

beforeAll(() => {
  copy = mkdtempSync(join(tmpdir(), 'must-fail-'));
  for (const part of [
    'src-core',
    'src-main',
    'src-renderer',
    'test',
    '.dependency-cruiser.cjs',
    'biome.json',
    'package.json',
    'tsconfig.json',
    'tsconfig.base.json',
    '.gitignore',
  ])
    cpSync(join(root, part), join(copy, part), {
      recursive: true,
      filter: (from) => !from.includes('reference/cases'),
    });
  symlinkSync(join(root, 'node_modules'), join(copy, 'node_modules'));
  // Types first, by themselves: a wrong import of Node or Electron would bring their types in.
  for (const one of wrong) if (one.net === 'types') put(one);
  outputs['types'] = runTool(copy, 'typescript/bin/tsc', ['--noEmit', '-p', 'src-core', '--pretty', 'false']).output;
  for (const one of wrong) put(one);
  outputs['layers'] = runTool(copy, 'dependency-cruiser/bin/dependency-cruiser.mjs', [
    '--output-type',
    'err',
    'src-core',
    'src-main',
    'src-renderer',
  ]).output;
  outputs['lint'] = runTool(copy, '@biomejs/biome/bin/biome', [
    'lint',
    '--colors=off',
    '--max-diagnostics=2000',
    '--vcs-enabled=false',
    'src-core',
    'src-renderer',
  ]).output;
}, 120_000);
afterAll(() => rmSync(copy, { recursive: true, force: true }));

describe('the nets', () => {
  it.each(wrong)('catch $name by $rule', ({ place, net, rule }) => {
    const blocks = (outputs[net] as string).split(/\n(?=\S)/);
    const named = blocks.filter((block) => block.includes(basename(place)) && block.includes(rule));
    expect(
      named.length,
      `${net} said nothing of ${place} by ${rule}:\n${blocks.filter((b) => b.includes(basename(place))).join('\n')}`,
    ).toBeGreaterThan(0);
  });

  it('have a wrong file for every rule of the layers', () => {
    const rules = readFileSync(join(root, '.dependency-cruiser.cjs'), 'utf8').match(/name: '([a-z-]+)'/g) ?? [];
    const proved = new Set(wrong.map((w) => w.rule));
    expect(rules.map((r) => r.slice(7, -1)).filter((rule) => !proved.has(rule))).toEqual([]);
  });
});
