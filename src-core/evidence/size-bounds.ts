import { factorOf } from '../algebra/factored';
import type { Fitted } from '../estimate/fitted';
import { checkModel, type Model } from '../inference/check-model';
import { fitChosen } from '../inference/fits';
import type { Structure } from '../model/structure';
import type { Plan } from '../protocol/plan';
import type { Coefficient } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { sizeEnds, sizesWithin, withSizes } from '../table/moved-sizes';
import type { BoundChange } from './bounds';
import { judgeOf } from './judge';
import { settledBy } from './settled';

/** Refits at most, as the work G k^2 that they may take together, and so many however large the table. */
const WORK = 2e8;
const FEWEST = 4;
const STEPS = 4;

/**
 * What sizes that are known to within so many do to each coefficient: the fit at the two choices of sizes that move it furthest.
 *
 *     db_j = C_jg [ dy_g + r_g d / (1 + d h_g) ],  d = A_gg / A'_gg - 1    for one cell's size, variance parameters held
 *
 * Each size goes to the end that this says, then everything is fitted again, and once more from there while that leads further. A: the cell's variance,
 * 1 / n under target "persons"; dy: of the share that its count is of its size; where cells go together -C_jg dA (A^-1 r)_g. The ends are a search's;
 * what is told there is the whole fit. Nothing where sizes are exact or nothing in the fit follows them.
 *
 * cells: before any outcome scale; asked: which coefficients, by index. Source: METHODS of the program, 6.
 */
export function sizeBoundsOf(of: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly model: Model;
  readonly asked: (j: number) => boolean;
  readonly hooks: Hooks;
}): BoundChange[] {
  const { fitted, cells, plan, model, asked, hooks } = of;
  const within = sizesWithin(plan);
  if (within === null || !cells.size || hooks.cancelled()) return [];
  const ends = sizeEnds(cells, within);
  const first: Step = { sizes: cells.size, fitted, model, coefficients: null };
  const moves = movesFrom(of, first, ends);
  if (!moves || [...moves.down, ...moves.up].every((move) => move === 0)) return [];
  const k = fitted.pulls.length;
  const budget = { left: Math.max(FEWEST, Math.floor(WORK / (cells.count * k * k))) };
  return fitted.design.names.flatMap((_, j) =>
    asked(j)
      ? [-1, 1].flatMap((towards): BoundChange[] => {
          hooks.progress('sensitivity', j / k);
          const found = furthest(of, { first, moves, ends, j, towards, budget });
          const one = found?.coefficients?.[j];
          return one ? [{ j, what: plan.roles.size as string, one }] : [];
        })
      : [],
  );
}

type Asked = Parameters<typeof sizeBoundsOf>[0];

/** A choice of sizes with the fit there. */
interface Step {
  readonly sizes: Float64Array;
  readonly fitted: Fitted;
  readonly model: Model;
  readonly coefficients: readonly Coefficient[] | null;
}

interface Ends {
  readonly low: Float64Array;
  readonly high: Float64Array;
}

/** What each cell's size does at either end, to be pulled. */
interface Moves {
  readonly down: Float64Array;
  readonly up: Float64Array;
}

function furthest(
  asked: Asked,
  of: {
    readonly first: Step;
    readonly moves: Moves;
    readonly ends: Ends;
    readonly j: number;
    readonly towards: number;
    readonly budget: { left: number };
  },
): Step | null {
  const { ends, j, towards, budget } = of;
  let best: Step = of.first;
  let moves: Moves | null = of.moves;
  for (let step = 0; step < STEPS && moves && budget.left > 0 && !asked.hooks.cancelled(); step++) {
    const { down, up } = moves;
    const pull = best.fitted.pulls[j] as Float64Array;
    const sizes = best.sizes.map((n, g) => {
      const gain = (move: number): number => towards * (pull[g] as number) * move;
      const [below, above] = [gain(down[g] as number), gain(up[g] as number)];
      if (below <= 0 && above <= 0) return n;
      return (below > above ? ends.low[g] : ends.high[g]) as number;
    });
    if (sizes.every((n, g) => n === best.sizes[g])) break;
    budget.left--;
    const there = stepAt(asked, sizes);
    if (
      !there ||
      towards * (there.fitted.coefficients[j] as number) <= towards * (best.fitted.coefficients[j] as number)
    )
      break;
    best = there;
    moves = movesFrom(asked, best, ends);
  }
  return best === of.first ? null : best;
}

function stepAt({ cells, plan, hooks }: Asked, sizes: Float64Array): Step | null {
  const model = checkModel({ plan: bare(plan), cells: withSizes(cells, sizes) });
  const again = model.ok ? fitChosen({ plan, model: model.value, hooks }) : null;
  if (!model.ok || !again?.ok) return null;
  const coefficients = judgeOf(model.value.cells, plan)(again.value, null);
  return { sizes, fitted: again.value, model: model.value, coefficients };
}

function movesFrom(asked: Asked, from: Step, ends: Ends): Moves | null {
  const [down, up] = [moveTo(asked, from, ends.low), moveTo(asked, from, ends.high)];
  return down && up ? { down, up } : null;
}

function moveTo({ plan, cells }: Asked, from: Step, sizes: Float64Array): Float64Array | null {
  const { fitted, model } = from;
  const moved = checkModel({ plan: bare(plan), cells: withSizes(cells, sizes) });
  if (!moved.ok) return null;
  const there = ({ chosen, design }: Model) => settledBy(fitted, { structure: chosen as Structure, design });
  const now = there(model);
  const slopes = now.at?.linked ? now.at.means.slopes : null;
  const response = moved.value.response.high;
  const variances = (structure: Structure): Float64Array => structure.samplingAt(fitted.theta);
  const [before, after] = [variances(now.structure), variances(there(moved.value).structure)];
  const scale = fitted.targetIsStructure ? (fitted.scale ?? 1) : 1;
  const { weighting, residuals, leverages } = fitted;
  const solved = weighting.blocks ? factorOf(weighting).solve(residuals) : null;
  return response.map((y, g) => {
    const dy = (y - (model.response.high[g] as number)) / (slopes?.[g] ?? 1);
    if (plan.target === 'cells') return dy;
    const dA =
      plan.target === 'persons'
        ? 1 / (sizes[g] as number) - 1 / (from.sizes[g] as number)
        : ((after[g] as number) - (before[g] as number)) / scale;
    if (solved) return dy - dA * (solved[g] as number);
    const own = weighting.diagonal[g] as number;
    const d = own / (own + dA) - 1;
    return dy + ((residuals[g] as number) * d) / (1 + d * (leverages[g] as number));
  });
}

function bare(plan: Plan): Plan {
  return { ...plan, beside: [], questions: [], inference: { kind: 'model', level: plan.inference.level } };
}
