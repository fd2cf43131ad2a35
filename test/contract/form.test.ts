import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { exitStatusOf } from '@core/protocol/problems';
import { normalPlan, normalTabulation, readPlan, readTabulation } from '@core/protocol/read';
import { describe, expect, it } from 'vitest';

// The files and what is expected of them are the contract's own (files/README.md says what each holds).

const folder = join(import.meta.dirname, 'files');

interface Listed {
  readonly file: string;
  readonly code: string;
  readonly at: string;
  readonly facts: object;
  readonly exit: number;
}

function textOf(...steps: string[]): string {
  return readFileSync(join(folder, ...steps), 'utf8');
}

function listOf(name: string): Listed[] {
  return JSON.parse(textOf(name, 'invalid.json')) as Listed[];
}

/** The codes that need nothing but the plan: the stage "form" of files/README.md. */
const formCodes = textOf('README.md')
  .split('\n')
  .flatMap((line) => /^\| `([a-z-]+)` \| \d \| form \|/.exec(line)?.slice(1) ?? []);

function isForm({ code }: Listed): boolean {
  return formCodes.includes(code);
}

const reads = {
  valid: { read: readPlan, normal: normalPlan },
  invalid: { read: readPlan, normal: normalPlan },
  tabulation: { read: readTabulation, normal: normalTabulation },
} as const;

function validOf(name: 'valid' | 'tabulation'): string[] {
  return readdirSync(join(folder, name))
    .filter((file) => file.endsWith('.normal.json'))
    .map((file) => file.replace('.normal.json', ''));
}

describe.each(['valid', 'tabulation'] as const)('what is valid in %s', (name) => {
  const { read, normal } = reads[name];

  it.each(validOf(name))('%s has the normal form that the contract gives, keys in the same order', (file) => {
    const expected = JSON.parse(textOf(name, `${file}.normal.json`)) as unknown;
    const found = read(textOf(name, `${file}.json`));
    if (!found.ok) throw new Error(JSON.stringify(found.problems));
    expect(found.value).toEqual(expected);
    expect(JSON.stringify(found.value)).toBe(JSON.stringify(expected));
  });

  it.each(validOf(name))('%s: normalising its normal form gives the same text', (file) => {
    const expected = JSON.parse(textOf(name, `${file}.normal.json`)) as unknown;
    const again = normal(expected);
    if (!again.ok) throw new Error(JSON.stringify(again.problems));
    expect(JSON.stringify(again.value)).toBe(JSON.stringify(expected));
  });
});

describe.each(['invalid', 'tabulation'] as const)('what is refused in %s', (name) => {
  const { read } = reads[name];
  const listed = listOf(name);
  const atForm = listed.filter(isForm);

  it.each(atForm)(
    '$file is refused as $code at "$at", with its facts, and with nothing else',
    ({ file, code, at, facts, exit }) => {
      const found = read(textOf(name, file));
      if (found.ok) throw new Error('it was accepted');
      expect(found.problems).toEqual([{ code, at, facts }]);
      expect(exitStatusOf(found.problems[0]?.code as 'not-json')).toBe(exit);
    },
  );

  it.each(listed.filter((one) => !isForm(one)))(
    '$file has the right form: $code is a matter of its data',
    ({ file }) => {
      const found = read(textOf(name, file));
      if (!found.ok) throw new Error(JSON.stringify(found.problems));
      expect(found.ok).toBe(true);
    },
  );
});

it('takes every code of the stage form from the contract, none twice', () => {
  expect(formCodes.length).toBe(22);
  expect(new Set(formCodes).size).toBe(formCodes.length);
});
