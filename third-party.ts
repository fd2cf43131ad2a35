// The licences of what is bundled into the program, or comes along with it, as one text beside each part of the build.
import { readdirSync, readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';

/** What of a package's own description counts here. */
interface Described {
  readonly name: string;
  readonly version: string;
  readonly license?: string;
  readonly author?: string | { readonly name?: string };
  readonly dependencies?: Readonly<Record<string, string>>;
}

/** What of the builder is asked. */
interface Building {
  readonly emitFile: (file: { type: 'asset'; fileName: string; source: string }) => unknown;
  readonly getModuleIds: () => Iterable<string>;
}

/**
 * Writes third-party.txt: name, version and the whole licence, notices included, of each package that a module of the build is of.
 *
 * along: packages that are not bundled but come with the program, with all that they need. texts: further licences, by what they are of.
 */
export function thirdParty({
  root,
  along = [],
  texts = {},
}: {
  readonly root: string;
  readonly along?: readonly string[];
  readonly texts?: Readonly<Record<string, string>>;
}) {
  return {
    name: 'third-party',
    generateBundle(this: Building): void {
      const folders = new Set([...this.getModuleIds()].flatMap(folderOf));
      for (const name of along) for (const folder of withNeeds(name, join(root, 'package.json'))) folders.add(folder);
      const entries = [...folders].map(entryOf);
      for (const [title, file] of Object.entries(texts))
        entries.push({ title, text: readFileSync(file, 'utf8').trim() });
      if (entries.length > 0) this.emitFile({ type: 'asset', fileName: 'third-party.txt', source: textOf(entries) });
    },
  };
}

/** The folder of the package that a module is of; none of the program's own. */
function folderOf(id: string): string[] {
  const found = /^\0?(.*[/\\]node_modules[/\\](?:@[^/\\]+[/\\])?[^/\\]+)[/\\]/.exec(id);
  return found?.[1] === undefined || found[1].includes('/.') ? [] : [found[1]];
}

/** A package and all that it needs when it runs. */
function withNeeds(name: string, from: string, found = new Set<string>()): ReadonlySet<string> {
  const folder = (createRequire(from).resolve.paths(name) ?? [])
    .map((path) => join(path, name))
    .find((path) => filesIn(path).includes('package.json'));
  if (folder === undefined) throw new Error(`the package ${name} is not installed`);
  if (found.has(folder)) return found;
  found.add(folder);
  for (const need of Object.keys(described(folder).dependencies ?? {}))
    withNeeds(need, join(folder, 'package.json'), found);
  return found;
}

function filesIn(folder: string): readonly string[] {
  try {
    return readdirSync(folder);
  } catch {
    return [];
  }
}

function described(folder: string): Described {
  return JSON.parse(readFileSync(join(folder, 'package.json'), 'utf8')) as Described;
}

interface Entry {
  readonly title: string;
  readonly text: string;
}

function entryOf(folder: string): Entry {
  const { name, version, license, author } = described(folder);
  const files = filesIn(folder)
    .filter((file) => /^(licen[cs]e|copying|notice|copyright)([.-]|$)/i.test(file))
    .sort();
  const title = `${name} ${version}${license === undefined ? '' : `, ${license}`}`;
  const texts = files.map((file) => readFileSync(join(folder, file), 'utf8').trim());
  if (texts.length > 0) return { title, text: texts.join('\n\n') };
  const by = typeof author === 'string' ? author : author?.name;
  if (license !== 'MIT' || by === undefined) throw new Error(`the package ${name} has no licence file`);
  return { title, text: `Copyright (c) ${by}\n\n${mit}` };
}

/** One licence after the other, under all that it is of. */
function textOf(entries: readonly Entry[]): string {
  const titles = new Map<string, string[]>();
  for (const { title, text } of entries) titles.set(text, [...(titles.get(text) ?? []), title]);
  const parts = [...titles].map(([text, of]) => ({ of: of.sort(), text }));
  parts.sort((one, other) => ((one.of[0] as string) < (other.of[0] as string) ? -1 : 1));
  const lead = 'Steelyard holds the work of others, under their licences:\n\n';
  return lead + parts.map(({ of, text }) => `${of.join('\n')}\n\n${text}\n`).join(`\n${'-'.repeat(78)}\n\n`);
}

/** The terms that packages mean which say MIT and bring no file. */
const mit = `Permission is hereby granted, free of charge, to any person obtaining a copy of this software and associated documentation files (the "Software"), to deal in the Software without restriction, including without limitation the rights to use, copy, modify, merge, publish, distribute, sublicense, and/or sell copies of the Software, and to permit persons to whom the Software is furnished to do so, subject to the following conditions:

The above copyright notice and this permission notice shall be included in all copies or substantial portions of the Software.

THE SOFTWARE IS PROVIDED "AS IS", WITHOUT WARRANTY OF ANY KIND, EXPRESS OR IMPLIED, INCLUDING BUT NOT LIMITED TO THE WARRANTIES OF MERCHANTABILITY, FITNESS FOR A PARTICULAR PURPOSE AND NONINFRINGEMENT. IN NO EVENT SHALL THE AUTHORS OR COPYRIGHT HOLDERS BE LIABLE FOR ANY CLAIM, DAMAGES OR OTHER LIABILITY, WHETHER IN AN ACTION OF CONTRACT, TORT OR OTHERWISE, ARISING FROM, OUT OF OR IN CONNECTION WITH THE SOFTWARE OR THE USE OR OTHER DEALINGS IN THE SOFTWARE.`;
