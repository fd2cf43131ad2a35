import type { Random } from '@core/numbers/random';
import type { Inference, Plan } from '@core/protocol/plan';
import { planOn } from './table';

type Parts = Plan['variance']['parts'];

/** Covariates, sizes, errors and groups of G cells, the same in every draw. */
export interface Ground {
  readonly x: Float64Array;
  readonly z: Float64Array;
  readonly n: Float64Array;
  readonly s: Float64Array;
  /** Groups of about four cells, of uneven size. */
  readonly group: readonly string[];
  /** A second grouping that crosses the first. */
  readonly also: readonly string[];
}

export interface Scenario {
  /** What is told of it in the table. */
  readonly name: string;
  /** True where the errors are drawn as the inference takes them to be: its intervals then cover 93 to 97 % from `from` cells on. */
  readonly own: boolean;
  /** Fewest cells for which that is claimed. */
  readonly from?: number;
  /** Share of the draws, where a fit takes long. */
  readonly share?: number;
  readonly plan: Plan;
  /** Draws the errors of all cells; given errors that are estimates are drawn with them. */
  readonly draw: (ground: Ground, random: Random) => { readonly errors: Float64Array; readonly s?: Float64Array };
}

const perSize: Parts = [{ kind: 'per-size', correlation: null }];
const constant: Parts = [{ kind: 'constant', correlation: null }];
const between = { kind: 'between', correlation: null } as const;
const given = (freedom: number | null): Parts => [{ kind: 'given', scale: 'fixed', freedom, correlation: null }];
const shared: Parts[number] = { kind: 'shared', by: ['group'] };
const restricted: Plan['estimate'] = { method: 'restricted' };
const leastSquares: Plan['estimate'] = { method: 'least-squares' };
const model: Inference = { kind: 'model', level: 0.95 };
const kenwardRoger: Inference = { kind: 'kenward-roger', level: 0.95 };
const robust = (correction: 'HC0' | 'HC1' | 'HC2' | 'HC3' | 'HC4'): Inference => ({
  kind: 'robust',
  level: 0.95,
  correction,
});
const clustered = (correction: 'CR0' | 'CR1' | 'CR2' | 'CR3', alsoBy: string[] | null = null): Inference => ({
  kind: 'clustered',
  level: 0.95,
  correction,
  by: ['group'],
  alsoBy,
});
const wild: Inference = { kind: 'wild', level: 0.95, by: ['group'], replications: 399, seed: 1 };

type Draw = Scenario['draw'];

const bySize: Draw = ({ n }, random) => ({ errors: n.map((m) => (6 * random.normal()) / Math.sqrt(m)) });
const bySizeAndCell: Draw = ({ n }, random) => ({
  errors: n.map((m) => (6 * random.normal()) / Math.sqrt(m) + random.normal()),
});
const byError: Draw = ({ s }, random) => ({ errors: s.map((sd) => sd * random.normal()) });
const byErrorAndCell: Draw = ({ s }, random) => ({ errors: s.map((sd) => sd * random.normal() + random.normal()) });
/** Given errors are estimates on some degrees of freedom. */
const byNoisyError =
  (freedom: number): Draw =>
  ({ s }, random) => {
    const estimated = s.map((sd) => {
      let sum = 0;
      for (let i = 0; i < freedom; i++) sum += random.normal() ** 2;
      return sd * Math.sqrt(sum / freedom);
    });
    return { errors: s.map((sd) => sd * random.normal()), s: estimated };
  };
/** The spread follows x, which no structure here knows. */
const byColumn: Draw = ({ x }, random) => ({ errors: x.map((value) => (0.4 + Math.abs(value)) * random.normal()) });
/** Cells of a group share a shock; beside it sampling by size. */
const byGroup: Draw = ({ n, group }, random) => {
  const shocks = new Map<string, number>();
  for (const one of group) if (!shocks.has(one)) shocks.set(one, random.normal());
  return { errors: n.map((m, g) => (6 * random.normal()) / Math.sqrt(m) + (shocks.get(group[g] as string) as number)) };
};
/** Shocks of both groupings. */
const byBoth: Draw = (ground, random) => {
  const { errors } = byGroup(ground, random);
  const shocks = new Map<string, number>();
  for (const one of ground.also) if (!shocks.has(one)) shocks.set(one, random.normal());
  return { errors: errors.map((e, g) => e + (shocks.get(ground.also[g] as string) as number)) };
};

const labelled = { label: ['group'] };

export const scenarios: readonly Scenario[] = [
  {
    name: 'model, per size, least squares',
    own: true,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: model }),
    draw: bySize,
  },
  {
    name: 'model, given errors, exact',
    own: true,
    plan: planOn({ parts: given(null), estimate: leastSquares, inference: model }),
    draw: byError,
  },
  {
    name: 'model, given errors on 100 d.f.',
    own: true,
    plan: planOn({ parts: given(100), estimate: leastSquares, inference: model }),
    draw: byNoisyError(100),
  },
  {
    name: 'model, per size + between, restricted',
    own: true,
    plan: planOn({ parts: [...perSize, between], estimate: restricted, inference: model }),
    draw: bySizeAndCell,
  },
  {
    name: 'model, per size + between, full',
    own: true,
    from: 200,
    plan: planOn({ parts: [...perSize, between], estimate: { method: 'full' }, inference: model }),
    draw: bySizeAndCell,
  },
  {
    name: 'model, per size + between, two-step',
    own: true,
    from: 200,
    plan: planOn({ parts: [...perSize, between], estimate: { method: 'two-step' }, inference: model }),
    draw: bySizeAndCell,
  },
  {
    name: 'Knapp-Hartung, given + between',
    own: true,
    plan: planOn({
      parts: [...given(null), between],
      estimate: restricted,
      inference: { kind: 'knapp-hartung', level: 0.95, floor: false },
    }),
    draw: byErrorAndCell,
  },
  {
    name: 'Knapp-Hartung, Paule-Mandel',
    own: true,
    plan: planOn({
      parts: [...given(null), between],
      estimate: { method: 'moments', rule: 'paule-mandel' },
      inference: { kind: 'knapp-hartung', level: 0.95, floor: false },
    }),
    draw: byErrorAndCell,
  },
  {
    name: 'Kenward-Roger, per size + between',
    own: true,
    plan: planOn({ parts: [...perSize, between], estimate: restricted, inference: kenwardRoger }),
    draw: bySizeAndCell,
  },
  {
    name: 'Kenward-Roger, per size + shared',
    own: true,
    share: 0.35,
    plan: planOn({ parts: [...perSize, shared], estimate: restricted, inference: kenwardRoger, ...labelled }),
    draw: byGroup,
  },
  {
    name: 'HC2, spread follows x',
    own: true,
    from: 60,
    plan: planOn({ parts: constant, estimate: leastSquares, inference: robust('HC2') }),
    draw: byColumn,
  },
  {
    name: 'HC3, spread follows x',
    own: true,
    from: 60,
    plan: planOn({ parts: constant, estimate: leastSquares, inference: robust('HC3') }),
    draw: byColumn,
  },
  {
    name: 'CR2, groups share a shock',
    own: true,
    from: 60,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: clustered('CR2'), ...labelled }),
    draw: byGroup,
  },
  {
    name: 'CR3, groups share a shock',
    own: true,
    from: 60,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: clustered('CR3'), ...labelled }),
    draw: byGroup,
  },
  {
    name: 'CR2 in a shared structure',
    own: true,
    from: 60,
    share: 0.35,
    plan: planOn({ parts: [...perSize, shared], estimate: restricted, inference: clustered('CR2'), ...labelled }),
    draw: byGroup,
  },
  {
    name: 'wild bootstrap, groups share a shock',
    own: true,
    from: 60,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: wild, ...labelled }),
    draw: byGroup,
  },
  {
    name: 'CR1 two ways, both share shocks',
    own: true,
    from: 200,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: clustered('CR1', ['also']), ...labelled }),
    draw: byBoth,
  },
  // Where they do not hold.
  {
    name: 'model, equal variances, spread follows x',
    own: false,
    plan: planOn({ parts: constant, estimate: leastSquares, inference: model }),
    draw: byColumn,
  },
  {
    name: 'model, per size, groups share a shock',
    own: false,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: model }),
    draw: byGroup,
  },
  {
    name: 'model, per size + shared, not corrected',
    own: false,
    share: 0.35,
    plan: planOn({ parts: [...perSize, shared], estimate: restricted, inference: model, ...labelled }),
    draw: byGroup,
  },
  {
    name: 'model, given errors on 30 d.f., told',
    own: false,
    plan: planOn({ parts: given(30), estimate: leastSquares, inference: model }),
    draw: byNoisyError(30),
  },
  {
    name: 'model, given errors on 5 d.f., taken as exact',
    own: false,
    plan: planOn({ parts: given(null), estimate: leastSquares, inference: model }),
    draw: byNoisyError(5),
  },
  {
    name: 'model, given errors on 5 d.f., told',
    own: false,
    plan: planOn({ parts: given(5), estimate: leastSquares, inference: model }),
    draw: byNoisyError(5),
  },
  {
    name: 'HC0, spread follows x',
    own: false,
    plan: planOn({ parts: constant, estimate: leastSquares, inference: robust('HC0') }),
    draw: byColumn,
  },
  {
    name: 'HC1, spread follows x',
    own: false,
    plan: planOn({ parts: constant, estimate: leastSquares, inference: robust('HC1') }),
    draw: byColumn,
  },
  {
    name: 'HC3, groups share a shock',
    own: false,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: robust('HC3') }),
    draw: byGroup,
  },
  {
    name: 'CR0, groups share a shock',
    own: false,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: clustered('CR0'), ...labelled }),
    draw: byGroup,
  },
  {
    name: 'CR1, groups share a shock',
    own: false,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: clustered('CR1'), ...labelled }),
    draw: byGroup,
  },
  {
    name: 'CR2 one way, both groupings share shocks',
    own: false,
    plan: planOn({ parts: perSize, estimate: leastSquares, inference: clustered('CR2'), ...labelled }),
    draw: byBoth,
  },
];
