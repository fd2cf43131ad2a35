import { describe, expect, it } from 'vitest';
import { hookedRun } from './hostile';

const cells = Array.from({ length: 12 }, (_, g) => g);
const columns = {
  block: cells.map((g) => g % 3),
  label: cells,
  x: cells.map((g) => (g * 7) % 11),
  n: cells.map((g) => 4 + ((g * g) % 17)),
  y: cells.map((g) => Number((3 + g / 2 + Math.sin(5 * g)).toFixed(3))),
};
const said = {
  roles: { label: ['block', 'label'], outcome: 'y', size: 'n' },
  terms: [{ column: 'x' }],
  variance: { parts: [{ kind: 'size-power', exponent: 'estimate' }, { kind: 'between' }] },
  beside: ['constant', { parts: [{ kind: 'per-size' }, { kind: 'between' }] }],
};

/** A run that is cancelled when it asks for the n-th time. */
function cancelledAt(last: number) {
  let looks = 0;
  const run = hookedRun(columns, said, { cancelled: () => ++looks >= last, progress: () => {} });
  return { run, looks };
}

describe('a run that is cancelled', () => {
  it('asks often enough to end soon, and ends in nothing but that it was cancelled, wherever it stood', () => {
    const { run, looks } = cancelledAt(Number.POSITIVE_INFINITY);
    expect(run.ok).toBe(true);
    expect(looks).toBeGreaterThan(200);
    for (let i = 1; i <= 24; i++) {
      const cancelled = cancelledAt(Math.ceil((looks * i) / 24)).run;
      expect(cancelled.ok ? [] : cancelled.problems.map(({ code }) => code)).toEqual(['cancelled']);
    }
  });
});

describe('the progress of a run', () => {
  it('rises from 0 to 1 and never falls', () => {
    const shares: number[] = [];
    hookedRun(columns, said, { cancelled: () => false, progress: (_, share) => shares.push(share) });
    expect(shares.length).toBeGreaterThan(20);
    expect(shares).toEqual([...shares].sort((a, b) => a - b));
    expect(shares[0]).toBe(0);
    expect(shares.at(-1)).toBeLessThanOrEqual(1);
  });
});
