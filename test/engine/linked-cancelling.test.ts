import { analyse } from '@core/analyse';
import type { Correlation, Plan } from '@core/protocol/plan';
import { describe, expect, it } from 'vitest';
import { type CaseFit, cellsOf, loadCase, planOf } from '../support/case';

const id = 'library-panel-links';
const of = loadCase(id);
const base = planOf(of, of.fits.find(({ fit }) => fit === 'shared-restricted') as CaseFit);
const serial: Correlation = { kind: 'serial', by: ['district'], order: 'year' };
const plan: Plan = {
  ...base,
  variance: {
    parts: [
      { kind: 'per-size', correlation: null },
      { kind: 'between', correlation: serial },
      { kind: 'shared', by: ['district'] },
    ],
    fixed: {},
  },
  beside: ['per-size', { parts: [{ kind: 'per-size', correlation: serial }], fixed: {} }],
};
const cells = cellsOf(id, plan);

function runUntil(most: number) {
  let looks = 0;
  const shares: number[] = [];
  const hooks = { cancelled: () => ++looks > most, progress: (_: string, share: number) => void shares.push(share) };
  const outcome = analyse({ plan, cells, hooks });
  return { outcome, looks, shares };
}

describe('a run on cells that go together', () => {
  const whole = runUntil(Number.POSITIVE_INFINITY);

  it('tells progress that rises and never falls, from the fit through rivals, intervals, draws and checks', () => {
    expect(whole.outcome.ok).toBe(true);
    expect(whole.shares).toEqual([...whole.shares].sort((a, b) => a - b));
    expect(whole.shares.length).toBeGreaterThan(20);
  });

  it('asks in every search whether it was cancelled, and ends soon in nothing but that', () => {
    expect(whole.looks).toBeGreaterThan(1000);
    for (let i = 1; i <= 12; i++) {
      const most = Math.floor((whole.looks * i) / 13);
      const { outcome, looks } = runUntil(most);
      expect(outcome.ok ? [] : outcome.problems.map(({ code }) => code)).toEqual(['cancelled']);
      expect(looks - most).toBeLessThan(2000);
    }
  });
});
