import type { Design } from '@core/model/design';
import type { Structure } from '@core/model/structure';
import { joinParts } from '@core/model/structure-join';
import type { SamplingPart } from '@core/model/variance-part';
import { type Decimals, fromDoubles } from '@core/numbers/decimals';
import { pow } from '@core/numbers/elementary';
import { seeded } from '@core/numbers/random';

/** A made-up problem of independent cells, drawn from a seed. */
export interface Drawn {
  readonly response: Decimals;
  readonly design: Design;
  readonly sizes: Float64Array;
  readonly errors: Float64Array;
}

/** Cells with an intercept and k - 1 covariates; some draws are heavy-tailed, some have no variance between cells. */
export function draw(seed: number, cells: number, terms: number): Drawn {
  const random = seeded(seed);
  const columns = Array.from({ length: terms }, (_, j) =>
    fromDoubles(Float64Array.from({ length: cells }, () => (j === 0 ? 1 : random.normal()))),
  );
  const sizes = Float64Array.from({ length: cells }, () => Math.floor(1 + 200 * random.uniform() * random.uniform()));
  const errors = sizes.map((n) => (0.5 + random.uniform()) * Math.sqrt(10 / n));
  const between = Math.max(0, random.normal()) * 0.7;
  const heavy = random.uniform() < 0.5;
  const response = errors.map((s, g) => {
    const tail = heavy ? Math.max(0.05, random.uniform()) : 1;
    const noise = (s * random.normal() + between * random.normal()) / tail;
    return columns.reduce((sum, column, j) => sum + (j + 1) * (column.high[g] as number), noise);
  });
  const names = columns.map((_, j) => (j === 0 ? 'intercept' : `x${j}`));
  return {
    response: fromDoubles(response),
    design: { names, columns, termOf: columns.map((_, j) => j - 1), intercept: true },
    sizes,
    errors,
  };
}

/** between + per-size · between + given · size-power with its exponent estimated · between + size-power. */
export type Kind = 'between-per-size' | 'between-given' | 'size-power' | 'between-size-power';

export function structureFor(kind: Kind, { sizes, errors }: Drawn, fixed: Record<string, number> = {}): Structure {
  const power = (delta: number) => sizes.map((n) => pow(n, -delta));
  const known = (a: Float64Array, part: SamplingPart['kind'], scale: 'free' | 'fixed'): SamplingPart => ({
    kind: part,
    scale,
    at: () => a,
    slopeAt: null,
  });
  const sampling: SamplingPart =
    kind === 'between-per-size'
      ? known(power(1), 'per-size', 'free')
      : kind === 'between-given'
        ? known(
            errors.map((s) => s * s),
            'given',
            'fixed',
          )
        : {
            kind: 'size-power',
            scale: 'free',
            at: power,
            slopeAt: (delta) => power(delta).map((a, g) => -Math.log(sizes[g] as number) * a),
          };
  const between = kind === 'size-power' ? 'none' : 'last';
  return joinParts({ cells: sizes.length, sampling, between, fixed });
}
