import { readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { messagesOf, steelyard } from './steelyard';

const files = resolve('test/contract/files');

interface Entry {
  readonly file: string;
  readonly code: string;
  readonly at: string;
  readonly facts: object;
  readonly exit: number;
}

const invalid = JSON.parse(readFileSync(join(files, 'invalid/invalid.json'), 'utf8')) as Entry[];
const valid = [
  'given-between-serial',
  'log-linear-no-intercept',
  'matrix-labels',
  'minimal-per-size',
  'percent-half-width',
  'proportion-logit',
  'rate-log',
  'target-two-ways-questions',
];

describe('steelyard plan', () => {
  it.each(invalid)(
    'refuses $file by $code, at its place, with its facts and exit status',
    ({ file, code, at, facts, exit }) => {
      const { status, stdout, stderr } = steelyard(['plan', join(files, 'invalid', file), '--json']);
      const messages = messagesOf(stderr).map(({ text, ...rest }) => rest);
      expect(messages).toEqual([{ level: 'error', code, at, facts }]);
      expect(status).toBe(exit);
      expect(stdout).toBe('');
    },
  );

  it.each(valid)('prints the normal form of %s, which is its own normal form', (name) => {
    const { status, stdout, stderr } = steelyard(['plan', join(files, 'valid', `${name}.json`)]);
    expect(stderr).toBe('');
    expect(status).toBe(0);
    const normal = readFileSync(join(files, 'valid', `${name}.normal.json`), 'utf8');
    expect(stdout).toBe(`${JSON.stringify(JSON.parse(normal), null, 2)}\n`);
  });
});
