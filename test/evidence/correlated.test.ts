import { applied, type Covariance } from '@core/algebra/covariance';
import { factorOf } from '@core/algebra/factored';
import { blockShiftsOf } from '@core/evidence/block-shifts';
import { boundaryLikelihoodRatios } from '@core/evidence/boundary';
import { cellResultsOf } from '@core/evidence/cell-results';
import { frameOf } from '@core/evidence/frame';
import { heldFit } from '@core/evidence/held';
import { deletionShifts } from '@core/evidence/influence';
import { pricesOf, squareOf } from '@core/evidence/price';
import { selfChecksOf } from '@core/evidence/self-checks';
import { structureEvidence } from '@core/evidence/structure-evidence';
import { placesWithout } from '@core/evidence/subset';
import { seeded } from '@core/numbers/random';
import type { Plan, Variance } from '@core/protocol/plan';
import { describe, expect, it, test } from 'vitest';
import { valueOf as quantityIn } from '../reference/quantities-sensitivity';
import { loadCase, outside, planOf } from '../support/case';
import { apart, fittedCase, fittedTable, rivalsOf } from './sensitivity-case';

const by = ['district'];
const structures: readonly [string, Variance['parts']][] = [
  [
    'shared beside per-size',
    [
      { kind: 'per-size', correlation: null },
      { kind: 'shared', by },
    ],
  ],
  [
    'an exchangeable between part beside per-size',
    [
      { kind: 'per-size', correlation: null },
      { kind: 'between', correlation: { kind: 'exchangeable', by } },
    ],
  ],
  ['serial per-size', [{ kind: 'per-size', correlation: { kind: 'serial', by, order: 'year' } }]],
  [
    'crossed shocks beside constant',
    [
      { kind: 'constant', correlation: null },
      { kind: 'shared', by },
      { kind: 'shared', by: ['year'] },
    ],
  ],
];

const fixed: readonly Record<string, number>[] = [
  { phi: 30, 'omega2: district': 0.1 },
  { phi: 30, tau2: 0.2, 'rho: between': 0.4 },
  { 'rho: per-size': 0.6 },
  { phi: 1, 'omega2: district': 0.5, 'omega2: year': 0.3 },
];

/** Forty cells in nine districts and five years, the outcome drawn. */
function panel(seed: number): string {
  const { normal, uniform } = seeded(seed);
  const rows = ['district,year,n,x,z,y'];
  for (let g = 0; g < 40; g++) {
    const x = normal();
    const n = 5 + Math.floor(200 * uniform());
    rows.push(
      [`d${g % 9}`, `${2000 + Math.floor(g / 9) + (g > 26 ? 2 : 0)}`, n, x, normal(), 1 + 0.5 * x + normal()].join(),
    );
  }
  return rows.join('\n');
}

const base = planOf(loadCase('library-panel-links'), loadCase('library-panel-links').fits[0] as never);

function planWith(variance: Variance, change: Partial<Plan> = {}): Plan {
  return {
    ...base,
    roles: { ...base.roles, label: ['district', 'year'], outcome: 'y', size: 'n' },
    terms: [{ column: 'x' }, { column: 'z' }],
    variance,
    estimate: { method: 'least-squares' },
    ...change,
  };
}

// library-panel-influence: computed at 50 digits and by deleting cells and blocks, variance parameters held.
test.each(['shared-held', 'exchangeable-held'])(
  'every influence figure of library-panel-influence under %s is the reference',
  (fit) => {
    const { of, plan, cells, fitted } = fittedCase('library-panel-influence', fit);
    const results = cellResultsOf({ fitted, cells });
    const asked = of.expected.filter(
      (one) => one.fit === fit && /^(leverage|studentised|cooks|dffits|dfbetas)/.test(one.quantity),
    );
    expect(asked.length).toBeGreaterThan(80);
    let worst = 0;
    for (const { quantity } of asked) {
      const found = quantityIn(quantity, results, { plan, terms: fitted.design.names });
      worst = Math.max(worst, apart(found as number, outside(of, fit, quantity)));
    }
    expect(worst).toBeLessThan(1e-10);
    const shifts = blockShiftsOf(fitted);
    const districts = cells.texts('district');
    const blocks = of.expected.filter((one) => one.fit === fit && one.quantity.startsWith('block_shift'));
    expect(blocks.length).toBeGreaterThan(5);
    for (const { quantity } of blocks) {
      const [, term, district] = quantity.split(':') as [string, string, string];
      const gone = districts.flatMap((name, g) => (name === district ? [g] : []));
      const name = fitted.design.names.indexOf(term === '(Intercept)' ? 'intercept' : term);
      expect(apart(shifts(gone)?.[name] as number, outside(of, fit, quantity))).toBeLessThan(1e-10);
    }
  },
);

describe.each(
  structures.map(([name, parts], i) => ({ name, variance: { parts, fixed: fixed[i] as Record<string, number> } })),
)('under $name', ({ variance }) => {
  const plan = planWith(variance);
  const { fitted, cells } = fittedTable(panel(7), plan);

  it('what deleting a cell does to the coefficients is what a refit without it says', () => {
    const shifts = deletionShifts(fitted);
    for (let g = 0; g < cells.count; g++) {
      const left = heldFit(fitted, placesWithout(cells.count, new Set([g])));
      for (const [j, b] of fitted.coefficients.entries())
        expect(Math.abs(b - (shifts[j]?.[g] as number) - (left?.coefficients[j] as number))).toBeLessThan(1e-12);
    }
  });

  it('so are Cook’s distance, the fit shift and the covariance ratio', () => {
    const results = cellResultsOf({ fitted, cells }).cells;
    const k = fitted.coefficients.length;
    for (let g = 0; g < cells.count; g += 7) {
      const own = results[g];
      const left = heldFit(fitted, placesWithout(cells.count, new Set([g])));
      if (!left || !own) throw new Error('no refit');
      const d = fitted.coefficients.map((b, j) => b - (left.coefficients[j] as number));
      const through = factorOf(fitted.omega).solve(
        fitted.residuals.map((_, h) =>
          d.reduce((sum, dj, j) => sum + dj * (fitted.design.columns[j]?.high[h] as number), 0),
        ),
      );
      const size = d.reduce(
        (sum, dj, j) =>
          sum + dj * through.reduce((inner, t, h) => inner + t * (fitted.design.columns[j]?.high[h] as number), 0),
        0,
      );
      expect(apart(own.cookDistance as number, size / k)).toBeLessThan(1e-8);
      const row = fitted.design.columns.map((column) => column.high[g] as number);
      const variance = (cov: readonly Float64Array[]) =>
        row.reduce((sum, x, i) => sum + x * row.reduce((inner, z, j) => inner + z * (cov[i]?.[j] as number), 0), 0);
      const moved = row.reduce((sum, x, j) => sum + x * (d[j] as number), 0);
      const scale = left.scale === null ? 1 : left.scale / (fitted.scale as number);
      expect(apart(own.fitShift as number, moved / Math.sqrt(variance(fitted.covariance) * scale))).toBeLessThan(1e-8);
      expect(
        apart(own.covarianceRatio as number, determinant(left.covariance) / determinant(fitted.covariance)),
      ).toBeLessThan(1e-8);
    }
  });

  it('what deleting some cells does is what a refit without them says, whole blocks and parts of blocks', () => {
    const shifts = blockShiftsOf(fitted);
    const whole = cells.texts('district').flatMap((name, g) => (name === 'd3' ? [g] : []));
    for (const gone of [whole, [0, 1, 2], [5, 14, 39]]) {
      const left = heldFit(fitted, placesWithout(cells.count, new Set(gone)));
      for (const [j, b] of fitted.coefficients.entries())
        expect(Math.abs(b - (shifts(gone)?.[j] as number) - (left?.coefficients[j] as number))).toBeLessThan(1e-11);
    }
  });

  it('no rival weighting costs less than nothing, and expected claims are traces taken the long way', () => {
    const rivals = rivalsOf({ plan, cells, fitted }, ['constant', 'per-size']);
    for (const [i, told] of pricesOf({ fitted, rivals }).entries()) {
      const rival = rivals[i]?.fitted;
      if (!rival) throw new Error('no rival');
      const trace = cells.labels.reduce((sum, _, g) => {
        const unit = new Float64Array(cells.count).fill(1, g, g + 1);
        return sum + (leftOf(rival, applied(fitted.omega, unit))[g] as number);
      }, 0);
      const expected = Math.sqrt(trace / rival.residualFreedom);
      for (const [j, price] of told.price.entries()) {
        expect(price.cost).toBeGreaterThanOrEqual(0);
        const unscaled = Math.sqrt((rival.gramInverse[j] as Float64Array)[j] as number);
        expect(apart(price.expectedClaimedSe as number, expected * unscaled)).toBeLessThan(1e-10);
      }
      expect(Math.min(...(told.eigenvalues as number[]))).toBeGreaterThanOrEqual(0);
      if (i === 0) expect(told.efficiency).toBeLessThanOrEqual(1);
      else expect(told.efficiency).toBeNull();
      for (const { term, byCell } of told.moved) {
        const j = fitted.design.names.indexOf(term);
        const total = byCell.reduce((sum, one) => sum + one, 0);
        expect(Math.abs(total - ((rival.coefficients[j] as number) - (fitted.coefficients[j] as number)))).toBeLessThan(
          1e-11,
        );
      }
    }
    // The chosen structure as truth, its own weights: the errors of the fit.
    const own = squareOf([fitted, ...rivals.map((one) => one.fitted)]).filter(
      ({ truth, weighting }) => truth + weighting === 0,
    );
    for (const [j, { se }] of own.entries())
      expect(apart(se as number, fitted.errors[j] as number)).toBeLessThan(1e-12);
  });

  it('tests that read residuals one by one say that they cannot, and every self-check passes', () => {
    const { design } = fitted;
    const evidence = structureEvidence({ fitted, cells, plan, design });
    for (const test of ['koenker', 'white', 'dumouchel-duncan', 'shapiro-wilk', 'dependence'])
      expect(evidence.find((one) => one.test === test)?.detail['why']).toBe('correlated');
    const failed = selfChecksOf({
      fitted,
      cells,
      plan,
      rivals: rivalsOf({ plan, cells, fitted }, ['constant']),
    }).filter(({ passed }) => !passed);
    expect(failed).toEqual([]);
  });
});

/** M_A x = A^-1 (x - X b), b the rival's fit of x. */
function leftOf(
  {
    weighting,
    design,
    pulls,
  }: { weighting: Covariance; design: { columns: readonly { high: Float64Array }[] }; pulls: readonly Float64Array[] },
  x: Float64Array,
): Float64Array {
  const b = pulls.map((row) => row.reduce((sum, c, g) => sum + c * (x[g] as number), 0));
  return factorOf(weighting).solve(
    x.map((value, g) =>
      design.columns.reduce((left, { high }, j) => left - (high[g] as number) * (b[j] as number), value),
    ),
  );
}

function determinant(rows: readonly Float64Array[]): number {
  const left = rows.map((row) => Array.from(row));
  let product = 1;
  for (let i = 0; i < left.length; i++) {
    const pivot = left[i]?.[i] as number;
    product *= pivot;
    for (let a = i + 1; a < left.length; a++) {
      const share = (left[a]?.[i] as number) / pivot;
      for (let b = i; b < left.length; b++)
        (left[a] as number[])[b] = (left[a]?.[b] as number) - share * (left[i]?.[b] as number);
    }
  }
  return product;
}

// branch-panel-boundaries: computed at 50 digits (gen_methods2.py), the correlation by numerical second derivatives too.
test.each(['three-restricted', 'three-full'])(
  'likelihood ratios of two added variances under %s are the reference',
  (fit) => {
    const { of, plan, cells, fitted } = fittedCase('branch-panel-boundaries', fit);
    const evidence = boundaryLikelihoodRatios(frameOf({ fitted, cells, plan, design: fitted.design }), () => true);
    const sets = ['tau_squared=0', 'omega_squared=0', 'tau_squared=0,omega_squared=0'];
    for (const [i, zero] of sets.entries()) {
      expect(apart(evidence[i]?.statistic as number, outside(of, fit, `lr_statistic:${zero}`))).toBeLessThan(1e-9);
      expect(apart(evidence[i]?.p as number, outside(of, fit, `lr_p_mixture:${zero}`))).toBeLessThan(1e-9);
    }
    const detail = evidence[2]?.detail;
    expect(apart(detail?.['correlation'] as number, outside(of, fit, `mixture_correlation:${sets[2]}`))).toBeLessThan(
      1e-9,
    );
    for (const [w, value] of ((detail?.['weights'] ?? []) as number[]).entries())
      expect(Math.abs(value - outside(of, fit, `mixture_weight:${w}:${sets[2]}`))).toBeLessThan(1e-9);
  },
);
