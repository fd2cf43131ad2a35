import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import * as distributions from '@core/numbers/distributions';
import { parseDecimal } from '@core/numbers/double-double';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

// Source of every value: outside/quantiles.py, Newton steps on mpmath's tails in 50 digits.
const rows = JSON.parse(readFileSync(join(import.meta.dirname, 'outside/quantiles.json'), 'utf8')) as {
  readonly function: string;
  readonly arguments: readonly number[];
  readonly value: string;
}[];

const functions = distributions as unknown as Record<string, (...of: readonly number[]) => number>;

const NAMES = [
  'normalUpperQuantile',
  'tUpperQuantile',
  'chiSquareUpperQuantile',
  'chiSquareQuantile',
  'fUpperQuantile',
  'fQuantile',
  'noncentralChiSquareUpperQuantile',
  'noncentralFUpperQuantile',
  'noncentralTUpperQuantile',
];

describe('quantiles', () => {
  it('are all held against outside values, over a hundred of them with probabilities below 1e-12', () => {
    expect(new Set(rows.map((row) => row.function))).toEqual(new Set(NAMES));
    expect(rows.filter((row) => (row.arguments[0] as number) < 1e-12).length).toBeGreaterThan(100);
  });

  for (const name of NAMES)
    it(`agree with mpmath to 14 digits: ${name}`, () => {
      for (const row of rows.filter((candidate) => candidate.function === name)) {
        const [high, low] = parseDecimal(row.value) ?? [Number.NaN, 0];
        const found = functions[name]?.(...row.arguments) ?? Number.NaN;
        expect(Math.abs((found - high - low) / high), `${name}(${row.arguments.join(', ')})`).toBeLessThan(1e-14);
      }
    });

  const freedom = fc.double({ min: 0.5, max: 300, noNaN: true });
  const strength = fc.double({ min: 0, max: 60, noNaN: true });
  const probability = fc.double({ min: 1e-12, max: 0.9, noNaN: true });

  it('of noncentral distributions have the tail that was asked for, and are the central ones without noncentrality', () => {
    const { noncentralChiSquareUpper, noncentralFUpper, noncentralTUpper } = distributions;
    const close = (a: number, b: number, share = 1e-11) => expect(Math.abs(a / b - 1)).toBeLessThan(share);
    fc.assert(
      fc.property(probability, freedom, freedom, strength, (p, f, g, s) => {
        close(noncentralChiSquareUpper(distributions.noncentralChiSquareUpperQuantile(p, f, s), f, s), p);
        close(noncentralFUpper(distributions.noncentralFUpperQuantile(p, f, g, s), f, g, s), p);
        close(noncentralTUpper(distributions.noncentralTUpperQuantile(p, f, s / 20), f, s / 20), p);
        // Against the noncentrality the tail itself has absolute digits alone.
        const against = noncentralTUpper(distributions.noncentralTUpperQuantile(p, f, -s / 20), f, -s / 20);
        expect(Math.abs(against - p)).toBeLessThan(1e-12);
        close(distributions.noncentralChiSquareUpperQuantile(p, f, 0), distributions.chiSquareUpperQuantile(p, f));
        close(distributions.noncentralFUpperQuantile(p, f, g, 0), distributions.fUpperQuantile(p, f, g));
      }),
      { numRuns: 25, seed: 3 },
    );
    expect(distributions.noncentralTUpperQuantile(0.025, Number.POSITIVE_INFINITY, 1)).toBe(
      distributions.normalUpperQuantile(0.025) + 1,
    );
  });
});
