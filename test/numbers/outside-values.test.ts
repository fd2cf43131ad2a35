import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import * as distributions from '@core/numbers/distributions';
import { parseDecimal } from '@core/numbers/double-double';
import * as elementary from '@core/numbers/elementary';
import { logGamma } from '@core/numbers/stirling';
import { describe, expect, it } from 'vitest';

// Source of every value: outside/derive.py, mpmath 1.3.0 in 60 digits and more.
const rows = JSON.parse(readFileSync(join(import.meta.dirname, 'outside/values.json'), 'utf8')) as {
  readonly function: string;
  readonly arguments: readonly number[];
  readonly value: string;
}[];

const functions = { ...elementary, ...distributions, logGamma } as Record<string, (...of: readonly number[]) => number>;

/** The relative error allowed: a little over the worst that was found at thousands of such points. */
const ALLOWED: Record<string, number> = {
  exp: 1.2e-16,
  expm1: 1.6e-16,
  log: 1.5e-16,
  log1p: 1.6e-16,
  log10: 2.3e-16,
  tanh: 3e-16,
  atanh: 3e-16,
  arcsin: 1.6e-16,
  pow: 1.3e-16,
  logGamma: 1e-15,
  normalUpper: 4e-16,
  chiSquareUpper: 5e-15,
  chiSquareLower: 5e-15,
  tUpper: 5e-15,
  fUpper: 5e-15,
  fLower: 5e-15,
  noncentralChiSquareUpper: 1e-14,
  noncentralFUpper: 1e-14,
  noncentralTUpper: 1e-14,
};

describe('functions of numbers/', () => {
  it('are all held against outside values', () => {
    expect(new Set(rows.map((row) => row.function))).toEqual(new Set(Object.keys(ALLOWED)));
  });

  for (const [name, allowed] of Object.entries(ALLOWED))
    it(`agree with mpmath: ${name} to ${allowed} of the value`, () => {
      for (const row of rows.filter((candidate) => candidate.function === name)) {
        const [high, low] = parseDecimal(row.value) ?? [Number.NaN, 0];
        const found = functions[name]?.(...row.arguments) ?? Number.NaN;
        const off = Math.abs((found - high - low) / high);
        expect(off, `${name}(${row.arguments.join(', ')})`).toBeLessThanOrEqual(allowed);
      }
    });
});
