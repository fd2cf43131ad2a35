import { type Covariance, independent } from '@core/algebra/covariance';
import { fitStructure } from '@core/estimate/fit';
import type { Fitted } from '@core/estimate/fitted';
import { type Design, designOf } from '@core/model/design';
import type { Structure } from '@core/model/structure';
import { joinParts } from '@core/model/structure-join';
import type { SamplingPart } from '@core/model/variance-part';
import { type Decimals, fromDoubles, takeRows } from '@core/numbers/decimals';
import type { Estimate } from '@core/protocol/plan';
import type { Cells } from '@core/table/cells';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { open } from '../estimate/fitting';
import { draw } from '../estimate/problems';

type Kind = 'constant' | 'per-size' | 'given-free' | 'given-fixed' | 'between-per-size' | 'between-given';

interface Data {
  readonly response: Decimals;
  readonly design: Design;
  readonly sizes: Float64Array;
  readonly errors: Float64Array;
}

const kinds = ['constant', 'per-size', 'given-free', 'given-fixed', 'between-per-size', 'between-given'] as const;
const oneScale = ['constant', 'per-size', 'given-free'] as const;

/** 12 to 25 cells, three coefficients, from a seed: some heavy-tailed, some without variance between cells. */
const problems = fc
  .tuple(fc.integer({ min: 1, max: 1e6 }), fc.integer({ min: 12, max: 25 }))
  .map(([seed, cells]): Data => draw(seed, cells, 3));

function structureOfKind(kind: Kind, { sizes, errors }: Data): Structure {
  const known = (part: SamplingPart['kind'], a: Float64Array, scale: SamplingPart['scale']): SamplingPart => ({
    kind: part,
    scale,
    at: () => a,
    slopeAt: null,
  });
  const squares = errors.map((s) => s * s);
  const sampling = {
    constant: known(
      'constant',
      sizes.map(() => 1),
      'free',
    ),
    'per-size': known(
      'per-size',
      sizes.map((n) => 1 / n),
      'free',
    ),
    'between-per-size': known(
      'per-size',
      sizes.map((n) => 1 / n),
      'free',
    ),
    'given-free': known('given', squares, 'free'),
    'given-fixed': known('given', squares, 'fixed'),
    'between-given': known('given', squares, 'fixed'),
  }[kind];
  return joinParts({ cells: sizes.length, sampling, between: kind.startsWith('between') ? 'last' : 'none', fixed: {} });
}

function fitted(kind: Kind, data: Data, weighting: Covariance | null = null): Fitted {
  const estimate: Estimate = { method: kind.startsWith('between') ? 'restricted' : 'least-squares' };
  const { response, design } = data;
  return open(fitStructure({ response, design, structure: structureOfKind(kind, data), estimate, weighting }));
}

const errorsOf = (fit: Fitted) => fit.covariance.map((row, j) => Math.sqrt(row[j] as number));

/** Two fits agree: coefficients and errors within a share of the standard error. */
function expectSame(one: Fitted, other: Fitted, share = 1e-8): void {
  const errors = errorsOf(one);
  for (const [j, error] of errors.entries()) {
    expect(Math.abs((one.coefficients[j] as number) - (other.coefficients[j] as number))).toBeLessThan(share * error);
    expect(Math.abs(error - (errorsOf(other)[j] as number))).toBeLessThan(share * error);
  }
}

function rearranged(data: Data, rows: readonly number[]): Data {
  const take = (values: Float64Array) => Float64Array.from(rows, (row) => values[row] as number);
  return {
    response: takeRows(data.response, rows),
    design: { ...data.design, columns: data.design.columns.map((column) => takeRows(column, rows)) },
    sizes: take(data.sizes),
    errors: take(data.errors),
  };
}

function withColumn(data: Data, j: number, factor: number): Data {
  const columns = data.design.columns.map((column, i) =>
    i === j ? fromDoubles(column.high.map((x) => x * factor)) : column,
  );
  return { ...data, design: { ...data.design, columns } };
}

const dot = (a: ArrayLike<number>, b: ArrayLike<number>) =>
  Array.from(a, (x, g) => x * (b[g] as number)).reduce((sum, x) => sum + x, 0);
const some = { numRuns: 40 };

describe.each(kinds)('a fit under %s', (kind) => {
  it('does not depend on the order of the rows', () => {
    fc.assert(
      fc.property(problems, (data) => {
        const rows = Array.from(data.sizes.keys()).reverse();
        const turned = fitted(kind, rearranged(data, rows));
        expectSame(fitted(kind, data), turned);
      }),
      some,
    );
  });

  it('changes only a column’s own coefficient when its unit changes', () => {
    fc.assert(
      fc.property(problems, fc.constantFrom(1e-9, 1e-3, 1000, 3e7), (data, factor) => {
        const before = fitted(kind, data);
        const after = fitted(kind, withColumn(data, 1, factor));
        const back = after.covariance.map((row, i) =>
          row.map((value, j) => value * (i === 1 ? factor : 1) * (j === 1 ? factor : 1)),
        );
        const coefficients = after.coefficients.map((b, j) => (j === 1 ? b * factor : b));
        // The restricted likelihood moves by ln(factor), its maximum does not.
        expectSame(before, { ...after, coefficients, covariance: back }, 1e-7);
      }),
      some,
    );
  });

  it('leaves whitened residuals orthogonal to every whitened column', () => {
    fc.assert(
      fc.property(problems, (data) => {
        const fit = fitted(kind, data);
        for (const column of fit.design.columns) {
          const whitened = column.high.map((x, g) => x / Math.sqrt(fit.shape[g] as number));
          const size = Math.sqrt(dot(whitened, whitened) * dot(fit.whitened, fit.whitened));
          expect(Math.abs(dot(whitened, fit.whitened))).toBeLessThan(1e-13 * size);
        }
      }),
      some,
    );
  });

  it('has leverages that add up to the number of coefficients, each from 0 to 1', () => {
    fc.assert(
      fc.property(problems, (data) => {
        const { leverages } = fitted(kind, data);
        expect(leverages.reduce((sum, h) => sum + h, 0)).toBeCloseTo(3, 12);
        for (const h of leverages) expect(h >= 0 && h <= 1).toBe(true);
      }),
      some,
    );
  });

  it('has pulls whose products with the observations add up to the coefficient, under another target too', () => {
    fc.assert(
      fc.property(problems, fc.boolean(), (data, aside) => {
        const fit = fitted(kind, data, aside ? independent(data.sizes.map((n) => 1 / (1 + n))) : null);
        for (const [j, row] of fit.pulls.entries()) {
          const size = row.reduce((sum, c, g) => sum + Math.abs(c * (data.response.high[g] as number)), 0);
          expect(Math.abs(dot(row, data.response.high) - (fit.coefficients[j] as number))).toBeLessThan(1e-13 * size);
          for (const [i, column] of fit.design.columns.entries())
            expect(dot(row, column.high)).toBeCloseTo(i === j ? 1 : 0, 10);
        }
      }),
      some,
    );
  });

  it('has the covariance C Omega C', () => {
    fc.assert(
      fc.property(problems, fc.boolean(), (data, aside) => {
        const fit = fitted(kind, data, aside ? independent(data.sizes.map((n) => 1 / (1 + n))) : null);
        for (const [i, a] of fit.pulls.entries())
          for (const [j, b] of fit.pulls.entries()) {
            const size = Math.sqrt((fit.covariance[i]?.[i] as number) * (fit.covariance[j]?.[j] as number));
            const spread = a.map((c, g) => c * (fit.variances[g] as number));
            expect(Math.abs(dot(spread, b) - (fit.covariance[i]?.[j] as number))).toBeLessThan(1e-11 * size);
          }
      }),
      some,
    );
  });

  it('equals the unweighted fit of root-scaled data', () => {
    fc.assert(
      fc.property(problems, (data) => {
        const fit = fitted(kind, data);
        const scaled = (column: Decimals) =>
          fromDoubles(column.high.map((x, g) => x / Math.sqrt(fit.shape[g] as number)));
        const design = { ...data.design, columns: data.design.columns.map(scaled) };
        const root = fitted('constant', { ...data, response: scaled(data.response), design });
        const errors = errorsOf(root).map((error) => error / Math.sqrt(root.scale as number));
        for (const [j, error] of errorsOf(fit).entries()) {
          expect(Math.abs((root.coefficients[j] as number) - (fit.coefficients[j] as number))).toBeLessThan(
            1e-11 * error,
          );
          expect((errors[j] as number) * Math.sqrt(fit.scale ?? 1)).toBeCloseTo(error, 11);
        }
      }),
      some,
    );
  });
});

describe('scaling all sizes or errors', () => {
  it('changes neither coefficients nor errors while the scale is free', () => {
    fc.assert(
      fc.property(
        problems,
        fc.constantFrom(...oneScale, 'between-per-size' as const),
        fc.double({ min: 0.01, max: 100, noNaN: true }),
        (data, kind, factor) => {
          const scaled = {
            ...data,
            sizes: data.sizes.map((n) => n * factor),
            errors: data.errors.map((s) => s * factor),
          };
          expectSame(fitted(kind, data), fitted(kind, scaled));
        },
      ),
      some,
    );
  });

  it('changes errors by the same factor, coefficients not, while variances are known', () => {
    fc.assert(
      fc.property(problems, fc.double({ min: 0.01, max: 100, noNaN: true }), (data, factor) => {
        const before = fitted('given-fixed', data);
        const after = fitted('given-fixed', { ...data, errors: data.errors.map((s) => s * factor) });
        const back = after.covariance.map((row) => row.map((value) => value / factor / factor));
        expectSame(before, { ...after, covariance: back }, 1e-11);
      }),
      some,
    );
  });
});

it('splitting a cell into two equal halves changes nothing when variances are known', () => {
  fc.assert(
    fc.property(problems, fc.nat(11), (data, split) => {
      const rows = [...data.sizes.keys(), split];
      const twice = rearranged(data, rows);
      const errors = twice.errors.map((s, g) => (rows[g] === split ? s * Math.sqrt(2) : s));
      expectSame(fitted('given-fixed', data), fitted('given-fixed', { ...twice, errors }), 1e-11);
    }),
    some,
  );
});

it('a repeated column is always refused, by both names; a badly scaled good design never', () => {
  fc.assert(
    fc.property(problems, fc.integer({ min: -250, max: 250 }), (data, exponent) => {
      const factor = Number(`1e${exponent}`);
      const designed = (first: Float64Array, second: Float64Array) => {
        const columns: Record<string, Float64Array> = { first, second };
        const cells = {
          count: first.length,
          rows: [...first.keys()],
          numbers: (name: string) => ({
            values: fromDoubles(columns[name] as Float64Array),
            texts: [...first].map(String),
          }),
        };
        const term = (column: string, i: number) => ({
          term: i,
          factors: [{ kind: 'number' as const, column, form: { as: 'itself' as const }, name: column }],
          names: [column],
        });
        return designOf(
          [{ term: -1, factors: [], names: ['intercept'] }, term('first', 0), term('second', 1)],
          cells as unknown as Cells,
        );
      };
      const x = data.design.columns[1]?.high as Float64Array;
      const z = data.design.columns[2]?.high as Float64Array;
      const refused = designed(
        x,
        x.map((value) => value * factor),
      );
      expect(refused.ok ? [] : refused.problems).toMatchObject([
        { code: 'dependent-columns', facts: { coefficients: ['first', 'second'] } },
      ]);
      expect(
        designed(
          x,
          z.map((value) => value * factor),
        ).ok,
      ).toBe(true);
    }),
    some,
  );
});
