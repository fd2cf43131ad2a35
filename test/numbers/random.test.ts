import { fromState, seeded } from '@core/numbers/random';
import { describe, expect, it } from 'vitest';

describe('random draws', () => {
  it('are those of xoshiro128** 1.1 (values of its reference code from a published test table)', () => {
    const { bits } = fromState([0x964d4a0c, 0xd40ab895, 0xad7fdecb, 0x3006f0f0]);
    expect([bits(), bits(), bits(), bits()]).toEqual([0xf1391922, 0x6fe53806, 0xa5be2840, 0xf510ee70]);
  });

  it('depend on the seed alone', () => {
    const [a, b, c, d] = [seeded(1), seeded(1), seeded(2), seeded(1 + 4294967296)];
    const ten = (of: { bits: () => number }) => Array.from({ length: 10 }, () => of.bits());
    const first = ten(a);
    expect(ten(b)).toEqual(first);
    expect(ten(c)).not.toEqual(first);
    expect(ten(d)).not.toEqual(first);
  });

  it('are pinned: the first of seed 1 never change', () => {
    const draws = seeded(1);
    expect([draws.bits(), draws.bits(), draws.uniform(), draws.normal()]).toEqual([
      2442144158, 3238099751, 0.889393932968683, -0.07380587689903612,
    ]);
  });

  it('are uniform and normal as far as 20,000 draws can show', () => {
    const { uniform, normal } = seeded(42);
    let [total, squares, fourth, below] = [0, 0, 0, 0];
    const count = 20_000;
    for (let n = 0; n < count; n++) {
      const u = uniform();
      expect(u > 0 && u < 1).toBe(true);
      below += u < 0.1 ? 1 : 0;
      const z = normal();
      total += z;
      squares += z * z;
      fourth += z * z * z * z;
    }
    // Four standard errors of each mean: 1, root 2, root 96 and root 0.09 over root 20,000.
    expect(Math.abs(total / count)).toBeLessThan(4 / Math.sqrt(count));
    expect(Math.abs(squares / count - 1)).toBeLessThan(4 * Math.sqrt(2 / count));
    expect(Math.abs(fourth / count - 3)).toBeLessThan(4 * Math.sqrt(96 / count));
    expect(Math.abs(below / count - 0.1)).toBeLessThan(4 * Math.sqrt(0.09 / count));
  });

  it('choose among six equally, as far as 12,000 draws can show', () => {
    const { below } = seeded(7);
    const counts = [0, 0, 0, 0, 0, 0];
    for (let n = 0; n < 12_000; n++) {
      const chosen = below(6);
      counts[chosen] = (counts[chosen] as number) + 1;
    }
    const statistic = counts.reduce((sum, found) => sum + (found - 2000) ** 2 / 2000, 0);
    expect(statistic).toBeLessThan(20.5); // chi-square on 5, p = 0.001
  });

  it('take only whole seeds and counts', () => {
    expect(() => seeded(0.5)).toThrow(RangeError);
    expect(() => seeded(1).below(0)).toThrow(RangeError);
  });
});
