import { blockShiftsOf } from '@core/evidence/block-shifts';
import { crossing } from '@core/evidence/crossing';
import { exponentScanOf } from '@core/evidence/exponent-scan';
import { judgeOf } from '@core/evidence/judge';
import { overturnOf, rivalName } from '@core/evidence/overturn';
import type { Coefficient } from '@core/protocol/result';
import { describe, expect, it } from 'vitest';
import { type FittedCase, fittedCase, fittedPlan, fittedTable, rivalsOf } from './sensitivity-case';

function overturned(known: Omit<FittedCase, 'of'>) {
  const { fitted, cells, plan } = known;
  const coefficients = judgeOf(cells, plan)(fitted, null) ?? [];
  const { ends } = exponentScanOf(known);
  return { coefficients, changes: overturnOf({ fitted, cells, plan, coefficients, rivals: rivalsOf(known), ends }) };
}

const own = (estimate: number, low: number | null, high: number | null): Coefficient => ({
  term: 'income',
  estimate,
  low,
  high,
  se: 1,
  reference: { kind: 't', freedom: 9 },
  ratio: null,
  p: null,
});

describe('the changes that were tried', () => {
  it('stand with the largest shift first, in errors, and leave the intercept out', () => {
    const known = fittedCase('schools-price', 'between-given-restricted');
    const { coefficients, changes } = overturned(known);
    const sizes = changes.map(({ term, estimate }) => {
      const chosen = coefficients.find((one) => one.term === term);
      return Math.abs(estimate - (chosen?.estimate as number)) / (chosen?.se as number);
    });
    for (const [i, size] of sizes.entries()) expect(size).toBeLessThanOrEqual((sizes[i - 1] ?? Infinity) + 1e-12);
    expect(new Set(changes.map(({ change }) => change.kind))).toEqual(new Set(['rival', 'cell', 'exponent', 'robust']));
    expect(changes.some(({ term }) => term === 'intercept')).toBe(false);
    expect(changes.filter(({ term, change }) => term === 'ses' && change.kind === 'cell').length).toBe(10);
  });

  it('tell of each deletion what a fit without the cell says, the largest of all cells first', () => {
    const known = fittedCase('library-influence', 'per-size');
    const { changes, coefficients } = overturned(known);
    const { cells, plan } = known;
    const names = ['district', 'mean_visits', 'n', 'income', 'area', 'opening'];
    const without = cells.labels.map((gone) => {
      const rows = cells.labels.flatMap((label, g) =>
        label === gone ? [] : [names.map((name) => cells.texts(name)[g]).join(',')],
      );
      const left = fittedTable([names.join(','), ...rows].join('\n'), plan);
      return { gone, coefficients: judgeOf(left.cells, plan)(fittedPlan(plan, left.cells), null) ?? [] };
    });
    const shift = (one: (typeof without)[number]) =>
      Math.abs((one.coefficients[1]?.estimate ?? 0) - (coefficients[1]?.estimate ?? 0));
    const largest = without.reduce((a, b) => (shift(b) > shift(a) ? b : a));
    const told = changes.find(({ term, change }) => term === 'income' && change.kind === 'cell');
    expect(told?.change.what).toBe(largest.gone);
    expect(told?.estimate).toBeCloseTo(largest.coefficients[1]?.estimate as number, 10);
    expect(told?.low).toBeCloseTo(largest.coefficients[1]?.low as number, 10);
  });

  it('hold the groups of every label column, by name and value', () => {
    const { plan } = fittedCase('physics-influence', 'scale-free');
    const panel = { ...plan, roles: { ...plan.roles, label: ['district', 'year'] } };
    const rows = ['a', 'b', 'c', 'd'].flatMap((district, d) =>
      [1, 2, 3].map((t) => `${district},${t},${d * t + (d % 2)},${d + t * t},1`),
    );
    const known = fittedTable(['district,year,x,y,se', ...rows].join('\n'), panel);
    const { changes } = overturned(known);
    const blocks = changes.filter(({ change }) => change.kind === 'block').map(({ change }) => change.what);
    expect(new Set(blocks)).toEqual(
      new Set(['district = a', 'district = b', 'district = c', 'district = d', 'year = 1', 'year = 2', 'year = 3']),
    );
    // The shift that ranks a block is that of its refit.
    const shifts = blockShiftsOf(known.fitted)([9, 10, 11]) ?? [];
    const told = changes.find(({ change }) => change.what === 'district = d');
    expect((known.fitted.coefficients[1] as number) - (shifts[1] as number)).toBeCloseTo(told?.estimate as number, 10);
  });

  it('try no deletion where nothing is left to judge by', () => {
    const { plan } = fittedCase('physics-influence', 'scale-free');
    expect(overturned(fittedTable('run,x,y,se\na,0,1,1\nb,1,2,1', plan)).changes).toEqual([]);
  });

  it('call rivals by their word or their parts', () => {
    expect(rivalName('per-size')).toBe('per-size');
    const variance = {
      parts: [
        { kind: 'size-power' as const, exponent: 0.5, correlation: null },
        { kind: 'between' as const, correlation: null },
      ],
      fixed: { tau2: 2 },
    };
    expect(rivalName(variance)).toBe('size-power 0.5 + between, tau2 = 2');
  });
});

describe('a change crosses', () => {
  it.each([
    ['zero where the sign turns', own(1, -1, 3), own(-0.1, -2, 2), null, 'zero'],
    ['zero where the interval takes it in', own(2, 1, 3), own(1.5, -0.1, 3), null, 'zero'],
    ['zero on the negative side', own(-2, -3, -1), own(-1.5, -3, 0), null, 'zero'],
    ['nothing where the chosen interval held zero too', own(1, -1, 3), own(0.5, -2, 3), null, null],
    ['what matters where the interval no longer clears it', own(2, 1, 3), own(1.8, 0.4, 3), 0.5, 'matters'],
    ['what matters where the estimate no longer does', own(2, 0.2, 3), own(0.9, 0.1, 2), 1, 'matters'],
    ['nothing that was not cleared before', own(0.4, 0.2, 0.6), own(0.3, 0.1, 0.5), 1, null],
    ['nothing where the change leaves no interval', own(2, 1, 3), own(1.9, null, null), null, null],
    [
      'what matters by the estimate where the change leaves no interval',
      own(2, 1, 3),
      own(0.9, null, null),
      1,
      'matters',
    ],
  ])('%s', (_, chosen, changed, matters, expected) => {
    expect(crossing(chosen, changed, matters)).toBe(expected);
  });
});
