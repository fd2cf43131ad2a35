import { type Cloud, countsOf, nearestIn, placesOf, stepFrom } from '@core/figures/cloud';
import { wholeView } from '@core/figures/plane';
import { movedBy, nearerBy } from '@core/figures/view';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

function cloudOf(points: readonly (readonly [number, number])[], size = 1): Cloud {
  return {
    x: Float64Array.from(points, ([x]) => x),
    y: Float64Array.from(points, ([, y]) => y),
    names: points.map((_, i) => `cell ${i}`),
    size,
    opacity: 0.5,
  };
}

const brush = { width: 10, height: 10, scale: 1, ink: [0, 0, 0] as const };
const sum = (counts: Uint8Array) => counts.reduce((all, one) => all + one, 0);

describe('a cloud', () => {
  it('counts its points on the pixels that they lie on, rows from the top', () => {
    const counts = countsOf(
      cloudOf([
        [0.05, 0.95],
        [0.05, 0.95],
        [0.95, 0.05],
      ]),
      wholeView,
      brush,
    );
    expect([counts[0], counts[99], sum(counts)]).toEqual([2, 1, 3]);
  });

  it('shows in a part of its plane the points of that part alone, however they lie', () => {
    const share = fc.double({ min: 0.001, max: 0.999, noNaN: true });
    fc.assert(
      fc.property(fc.array(fc.tuple(share, share), { maxLength: 40 }), share, share, (points, left, bottom) => {
        const view = { left: left / 2, right: left / 2 + 0.5, bottom: bottom / 2, top: bottom / 2 + 0.5 };
        const edge = (value: number, low: number) => Math.abs(value - low) < 1e-9 || Math.abs(value - low - 0.5) < 1e-9;
        const clear = points.filter(([x, y]) => !edge(x, view.left) && !edge(y, view.bottom));
        const inside = clear.filter(([x, y]) => x > view.left && x < view.right && y > view.bottom && y < view.top);
        expect(sum(countsOf(cloudOf(clear), view, brush))).toBe(inside.length);
      }),
    );
  });

  it('draws a point as wide as it is, cut at the edges', () => {
    expect(sum(countsOf(cloudOf([[0.5, 0.5]], 3), wholeView, brush))).toBe(9);
    expect(sum(countsOf(cloudOf([[0.001, 0.999]], 3), wholeView, brush))).toBe(4);
  });

  it('of more points on one pixel than can be counted is as dark as can be', () => {
    const counts = countsOf(cloudOf(Array.from({ length: 1000 }, () => [0.5, 0.5] as const)), wholeView, brush);
    expect(Math.max(...counts)).toBe(255);
  });

  it('finds the nearest point within reach, and no other', () => {
    const clouds = [
      cloudOf([
        [0.2, 0.2],
        [0.8, 0.8],
      ]),
    ];
    const sight = { across: 100, up: 100, reach: 24 };
    expect(nearestIn(clouds, { x: 0.25, y: 0.3 }, sight)).toBe('cell 0');
    expect(nearestIn(clouds, { x: 0.5, y: 0.5 }, sight)).toBeNull();
  });

  it('is walked from left to right, and stays at its ends', () => {
    const clouds = [
      cloudOf([
        [0.9, 0],
        [0.1, 0],
        [0.5, 0],
      ]),
    ];
    expect(stepFrom(clouds, null, 1)).toBe('cell 1');
    expect(stepFrom(clouds, 'cell 1', 1)).toBe('cell 2');
    expect(stepFrom(clouds, 'cell 0', 1)).toBe('cell 0');
    expect(stepFrom(clouds, 'cell 1', -1)).toBe('cell 1');
    expect(placesOf(clouds, 'cell 2')).toEqual([{ x: 0.5, y: 0 }]);
  });
});

describe('a view', () => {
  it('comes nearer about a place that stays where it was, and goes no further than the whole', () => {
    const share = fc.double({ min: 0, max: 1, noNaN: true });
    fc.assert(
      fc.property(share, share, fc.integer({ min: 1, max: 12 }), (x, y, steps) => {
        const near = nearerBy(wholeView, steps, { x, y });
        expect(near.left + x * (near.right - near.left)).toBeCloseTo(x, 10);
        expect(near.bottom + y * (near.top - near.bottom)).toBeCloseTo(y, 10);
        expect(nearerBy(near, -steps - 1)).toEqual(wholeView);
      }),
    );
    expect(nearerBy(wholeView, 100).right - nearerBy(wholeView, 100).left).toBeCloseTo(0.01, 12);
  });

  it('is moved by shares of itself, and never leaves the plane altogether', () => {
    expect(movedBy(wholeView, 0.25, 0)).toEqual({ left: 0.25, right: 1.25, bottom: 0, top: 1 });
    expect(movedBy(wholeView, 9, -9)).toEqual({ left: 0.5, right: 1.5, bottom: -0.5, top: 0.5 });
  });
});
