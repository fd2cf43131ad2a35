import { readdirSync, readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { arcsin, atanh, exp, expm1, log, log1p, log10, pow, tanh } from '@core/numbers/elementary';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

fc.configureGlobal({ seed: 8 });

const ALLOWED = new Set([
  'abs',
  'floor',
  'ceil',
  'trunc',
  'round',
  'sqrt',
  'sign',
  'fround',
  'min',
  'max',
  'imul',
  'clz32',
]);

function withoutComments(code: string): string {
  return code.replace(/\/\*[\s\S]*?\*\//g, '').replace(/\/\/.*$/gm, '');
}

/** Every file that is loaded for a module, itself included, by what it requires. */
function reached(entry: string, seen = new Set<string>()): Set<string> {
  if (seen.has(entry)) return seen;
  seen.add(entry);
  const load = createRequire(entry);
  for (const [, name] of withoutComments(readFileSync(entry, 'utf8')).matchAll(/require\(\s*'([^']+)'\s*\)/g)) {
    const target = load.resolve(name as string);
    if (target.startsWith('/') || /^[A-Za-z]:/.test(target)) reached(target, seen);
    else seen.add(`builtin ${target}`);
  }
  return seen;
}

describe('functions with fixed bits', () => {
  it('reach no built-in function whose last bit differs between engines, and no addon, in all that they load', () => {
    const room = join(import.meta.dirname, '../../src-core/numbers');
    const names = new Set<string>();
    for (const file of readdirSync(room))
      for (const [, name] of readFileSync(join(room, file), 'utf8').matchAll(/from '(@stdlib\/[^']+)'/g))
        names.add(name as string);
    expect(names.size).toBeGreaterThan(5);
    const load = createRequire(join(room, 'elementary.ts'));
    const files = [...names].flatMap((name) => [...reached(load.resolve(name))]);
    expect(files.filter((file) => file.startsWith('builtin') || file.endsWith('.node'))).toEqual([]);
    for (const file of files) {
      const code = withoutComments(readFileSync(file, 'utf8'));
      const used = [...code.matchAll(/\bMath\s*(?:\.\s*(\w+)|\[)/g)].map(([, name]) => name ?? 'computed');
      const wrong = used.filter((name) => !ALLOWED.has(name) && name === name.toLowerCase());
      expect({ file: dirname(file), wrong }).toEqual({ file: dirname(file), wrong: [] });
      expect(code).not.toMatch(/\*\*|import\(/);
    }
  });

  it('undo each other', () => {
    fc.assert(
      fc.property(fc.double({ min: -700, max: 700, noNaN: true }), (x) => {
        expect(log(exp(x))).toBeCloseTo(x, 12);
        expect(log1p(expm1(x / 20))).toBeCloseTo(x / 20, 13 - Math.ceil(Math.abs(x) / 40));
        expect(tanh(atanh(x / 701))).toBeCloseTo(x / 701, 14);
      }),
    );
  });

  it('agree with the square root and with products', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-100, max: 1e100, noNaN: true }), (x) => {
        expect(Math.abs(pow(x, 0.5) / Math.sqrt(x) - 1)).toBeLessThan(3e-16);
        expect(Math.abs(pow(x, 2) / (x * x) - 1)).toBeLessThan(3e-16);
        expect(pow(x, 1)).toBe(x);
        expect(pow(x, 0)).toBe(1);
      }),
    );
  });

  it('give decimal logarithms of the powers of ten as whole numbers', () => {
    for (let power = -307; power <= 308; power++) expect(log10(Number(`1e${power}`))).toBe(power);
    expect(log10(999.99999999)).toBeLessThan(3);
  });

  it('are odd where they should be, and keep the smallest arguments', () => {
    for (const of of [tanh, atanh, arcsin, expm1, log1p]) {
      expect(of(0)).toBe(0);
      expect(of(1e-300)).toBe(1e-300);
    }
    for (const of of [tanh, atanh, arcsin]) expect(of(-0.37)).toBe(-of(0.37));
  });

  it('say at the ends of their domain what the built-in ones say', () => {
    expect([log(0), log10(0), log1p(-1), atanh(1), atanh(-1)]).toEqual([
      -Infinity,
      -Infinity,
      -Infinity,
      Infinity,
      -Infinity,
    ]);
    expect([exp(-1000), exp(1000), tanh(1000), tanh(-1000)]).toEqual([0, Infinity, 1, -1]);
    expect(arcsin(1)).toBe(Math.PI / 2);
    for (const value of [log(-1), log1p(-2), atanh(1.5), arcsin(1.1), pow(-8, 1 / 3), log10(-1)])
      expect(value).toBeNaN();
  });
});
