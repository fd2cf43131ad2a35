import { describe, expect, it } from 'vitest';
import { coverageOf } from './coverage';
import { scenarios } from './scenarios';
import { sizesOfTests } from './test-sizes';

const named = (name: string) => {
  const found = scenarios.find((one) => one.name === name);
  if (!found) throw new Error(`no scenario ${name}`);
  return found;
};

/** `npm run simulate` draws them all, and often; a few are looked at here, by seed: three standard deviations of 250 draws are 4 per cent. */
const asked = { cells: 24, draws: 250, seed: 5 };

describe('intervals of 95 %', () => {
  it.each([
    'model, per size, least squares',
    'model, given errors, exact',
    'Knapp-Hartung, given + between',
    'Kenward-Roger, per size + between',
  ])('cover what they say under their own assumptions: %s', (name) => {
    const { x, z, joint, undefined: none } = coverageOf(named(name), asked);
    for (const share of [x, z, joint]) {
      expect(share).toBeGreaterThan(0.91);
      expect(share).toBeLessThan(0.99);
    }
    expect(none).toBe(0);
  });

  it('fall short where a shock is shared and errors take cells as independent, and CR2 makes up for it', () => {
    const alone = coverageOf(named('model, per size, groups share a shock'), { ...asked, cells: 60 });
    const clustered = coverageOf(named('CR2, groups share a shock'), { ...asked, cells: 60 });
    expect(alone.z).toBeLessThan(0.8);
    expect(clustered.z).toBeGreaterThan(0.9);
  });

  it('are the same in every run: the draws hang on their seed', () => {
    const once = coverageOf(named('wild bootstrap, groups share a shock'), { ...asked, draws: 20 });
    expect(coverageOf(named('wild bootstrap, groups share a shock'), { ...asked, draws: 20 })).toEqual(once);
  });
});

describe('tests of the structure', () => {
  it('reject at 5 % about as often as they say where the structure holds', () => {
    const lines = sizesOfTests({ sizes: [{ cells: 60, draws: 120 }], seed: 9 }).slice(1);
    expect(lines.length).toBeGreaterThan(10);
    for (const line of lines) expect(Number(/([0-9.]+)\s*$/.exec(line)?.[1])).toBeLessThan(11);
  });
});
