import { groupColumns, shareWidth, squeezeWidth, type Wish } from '@main/print/columns';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

const wish = (natural: number, least = natural, breadth = 1): Wish => ({ natural, least, breadth });
const sum = (values: readonly number[]) => values.reduce((total, value) => total + value, 0);

const wishes = fc.array(
  fc
    .record({
      least: fc.double({ min: 1, max: 60, noNaN: true }),
      more: fc.double({ min: 0, max: 200, noNaN: true }),
      breadth: fc.constantFrom(1, 2, 3),
    })
    .map(({ least, more, breadth }): Wish => ({ natural: least + more, least, breadth })),
  { minLength: 1, maxLength: 15 },
);
const width = fc.double({ min: 50, max: 600, noNaN: true });

describe('columns that share a width', () => {
  it('never exceed it together, and none gets less than its least', () => {
    fc.assert(
      fc.property(wishes, width, (all, whole) => {
        const widths = shareWidth(all, whole, 20);
        if (sum(all.map((one) => one.least)) > whole + 1e-9) {
          expect(widths).toBeNull();
          return;
        }
        expect(sum(widths ?? [])).toBeLessThanOrEqual(whole + 1e-6);
        for (const [i, one] of all.entries()) expect(widths?.[i]).toBeGreaterThanOrEqual(one.least - 1e-9);
      }),
    );
  });

  it('fill it where their natural widths do not fit', () => {
    fc.assert(
      fc.property(wishes, width, (all, whole) => {
        fc.pre(sum(all.map((one) => one.natural)) > whole && sum(all.map((one) => one.least)) <= whole);
        expect(Math.abs(sum(shareWidth(all, whole, 20) ?? []) - whole)).toBeLessThan(1e-3);
      }),
    );
  });

  it('get what is left over by breadth, up to a limit', () => {
    expect(shareWidth([wish(10, 10, 2), wish(10)], 50, Infinity)).toEqual([30, 20]);
    expect(shareWidth([wish(10, 10, 2), wish(10)], 50, 12)).toEqual([22, 20]);
  });

  it('give way in the column that can be broken', () => {
    expect(shareWidth([wish(90, 20), wish(30)], 100, 0)).toEqual([70, 30]);
  });
});

describe('columns cut into groups', () => {
  it('each stand once, in order, behind the first, and no group of several is too wide', () => {
    fc.assert(
      fc.property(wishes, width, (all, whole) => {
        const groups = groupColumns(all, whole);
        expect(groups.flatMap((group) => group.slice(1))).toEqual(all.slice(1).map((_, i) => i + 1));
        for (const group of groups) {
          expect(group[0]).toBe(0);
          const first = Math.min(all[0]?.least ?? 0, 0.4 * whole);
          const others = sum(group.slice(1).map((i) => all[i]?.least ?? 0));
          expect(group.length <= 2 || first + others <= whole + 1e-9).toBe(true);
        }
      }),
    );
  });

  it('are spread evenly over as few groups as hold them', () => {
    const all = Array.from({ length: 8 }, () => wish(20));
    expect(groupColumns(all, 120)).toEqual([
      [0, 1, 2, 3, 4],
      [0, 5, 6, 7],
    ]);
    expect(groupColumns([wish(40), wish(40), wish(40), wish(40)], 100)).toEqual([
      [0, 1],
      [0, 2],
      [0, 3],
    ]);
  });
});

it('columns too wide even at their least are cut down from the widest', () => {
  const widths = squeezeWidth([wish(200), wish(30), wish(10)], 100);
  expect(widths.map((one) => Math.round(one))).toEqual([60, 30, 10]);
});
