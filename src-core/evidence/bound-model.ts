import { type Covariance, independent } from '../algebra/covariance';
import { fitStructure, underStructure } from '../estimate/fit';
import { fitAt, shapeAt } from '../estimate/fit-at';
import type { Fitted } from '../estimate/fitted';
import { checkModel, type Model } from '../inference/check-model';
import { estimateFor, fitChosen } from '../inference/fits';
import { isLinked, onOutcomeScale } from '../model/outcome-scale';
import { freeParameters, type Structure } from '../model/structure';
import { fromDoubles } from '../numbers/decimals';
import { sumOfSquares } from '../numbers/sums';
import { done, type Outcome, refuse } from '../protocol/outcome';
import type { Plan } from '../protocol/plan';
import type { Hooks } from '../protocol/source';
import { factorsOf } from '../protocol/term-names';
import type { Cells, LimitedCells } from '../table/cells';
import { movedCells } from '../table/limited';
import { withScale } from './moved-outcome';
import { settledBy, workingAt } from './settled';
import { takeCells } from './subset';

/** Beyond this an end is as good as open: its square cannot be held. */
const LARGEST = 1e150;

/** The chosen fit carried over to the cells behind the bounds, its weights held. */
export interface BoundModel {
  readonly plan: Plan;
  readonly limited: LimitedCells;
  readonly model: Model;
  readonly held: Fitted;
  /** Ends of the response on the scale of the fit; infinite where open. */
  readonly low: Float64Array;
  readonly high: Float64Array;
  /** True where the weights do not depend on the outcome: bounds are then exact. */
  readonly fixedWeights: boolean;
}

/** A choice of values: outcomes in their own unit, covariates by column. */
export interface Values {
  readonly outcome: Float64Array;
  readonly covariates: ReadonlyMap<string, Float64Array>;
}

/**
 * The chosen fit on the used cells and those that a limit brings in: the same terms, the same structure at the variance parameters of the chosen fit.
 *
 * A cell brought in whose category or class no used cell has is left out again. Refuses what the model stage refuses on these cells.
 */
export function boundModelOf(of: {
  readonly plan: Plan;
  readonly limited: LimitedCells;
  readonly chosen: Model;
  readonly fitted: Fitted;
  readonly hooks: Hooks;
}): Outcome<BoundModel> {
  const { plan, chosen, fitted } = of;
  const limited = withKnownLevels(of.limited, plan);
  const model = checkModel({ plan: bare(plan), cells: limited.cells });
  if (!model.ok) return model;
  const { design } = model.value;
  const settled = settledBy(fitted, { structure: model.value.chosen as Structure, design });
  const { structure } = settled;
  const theta = thetaFor(structure, fitted);
  const variances = theta && structure.variancesAt(theta);
  if (
    !theta ||
    !variances?.every((v) => v > 0 && v < Infinity) ||
    model.value.design.names.join('\n') !== fitted.design.names.join('\n')
  )
    return refuse('not-available', { what: 'limits' }, '/data/limits');
  const own = model.value.response;
  const working = (values: Float64Array): Float64Array => (settled.at?.linked ? workingAt(settled.at, values) : values);
  const response = settled.at?.linked ? fromDoubles(working(own.high)) : own;
  const weighting = heldWeighting({ ...of, model: model.value, structure, theta });
  const { estimate, startsTried } = fitted;
  const held = rescaled(fitAt({ response, design, structure, estimate, weighting, theta, startsTried }), fitted);
  return done({
    ...{ plan, limited, model: model.value, held },
    low: working(responseAt(limited, 'low')),
    high: working(responseAt(limited, 'high')),
    fixedWeights: hasFixedWeights(plan, chosen.chosen as Structure) && limited.covariates.length === 0,
  });
}

/** A free common scale is no weight: it follows the residuals of these cells, at the divisor of the method. */
function rescaled(held: Fitted, fitted: Fitted): Fitted {
  if (held.scale === null || fitted.scale === null) return held;
  const byCells = fitted.estimate.method === 'full' || fitted.estimate.method === 'two-step';
  const freedom = ({ residualFreedom, response }: Fitted): number => (byCells ? response.high.length : residualFreedom);
  const squares = (one: Fitted): number => sumOfSquares(underStructure(one).whitened);
  const before = squares(fitted) / freedom(fitted);
  const now = squares(held) / freedom(held);
  // Residuals that were all zero, or none: the plain rule of the divisor.
  const scale = before > 0 && fitted.scale > 0 ? (fitted.scale / before) * now : now;
  return withScale(held, scale / held.scale);
}

/** A plan for a fit alone: nothing beside it, nothing asked of it. */
function bare(plan: Plan): Plan {
  return { ...plan, beside: [], questions: [], inference: { kind: 'model', level: plan.inference.level } };
}

/** The whole fit again, weights and variance parameters included, at other values. */
export function refittedAt(
  bounded: Pick<BoundModel, 'plan' | 'limited'>,
  values: Values,
  hooks: Hooks,
): Outcome<Fitted> {
  const cells = movedCells(bounded.limited.cells, values);
  const plan = bare(bounded.plan);
  const model = checkModel({ plan, cells });
  return model.ok ? fitChosen({ plan: bounded.plan, model: model.value, hooks }) : model;
}

/** Weights that nothing in the outcome moves: equal ones, persons, or a structure in which at most one common scale is unknown. */
function hasFixedWeights({ roles, outcomeScale, target, variance }: Plan, structure: Structure): boolean {
  const given = variance.parts.some(({ kind }) => kind === 'given');
  const fromOutcome = (given && (roles.errorKind === 'cv' || outcomeScale !== 'identity')) || outcomeScale === 'logit';
  if (target === 'cells' || target === 'persons') return outcomeScale !== 'logit';
  if (fromOutcome || structure.meanDependent !== null || typeof target !== 'string') return false;
  return freeParameters(structure).length === 0 || (structure.commonScale && freeParameters(structure).length === 1);
}

function thetaFor(structure: Structure, fitted: Fitted): Float64Array | null {
  const known = new Map(fitted.structure.parameters.map(({ name }, i) => [name, fitted.theta[i] as number]));
  const values = structure.parameters.map(({ name }) => known.get(name) ?? Number.NaN);
  const whole = structure.parameters.every(({ name }) => known.has(name));
  return whole && known.size === values.length ? Float64Array.from(values) : null;
}

/** The target's weights on the cells behind the bounds, with what it estimates held at the used cells'. */
function heldWeighting(of: {
  readonly plan: Plan;
  readonly chosen: Model;
  readonly model: Model;
  readonly structure: Structure;
  readonly theta: Float64Array;
  readonly hooks: Hooks;
}): Covariance | null {
  const { plan, chosen, model, structure, theta, hooks } = of;
  const { target } = plan;
  if (target === 'structure') return null;
  if (target === 'cells') return independent(new Float64Array(model.cells.count).fill(1));
  if (target === 'persons') return independent((model.cells.size as Float64Array).map((n) => 1 / n));
  if (target === 'diagonal') {
    const shape = shapeAt(structure, theta);
    return shape.blocks ? independent(shape.diagonal) : null;
  }
  const own = chosen.target as Structure;
  const { response, design } = chosen;
  const estimate = estimateFor(target, own, plan.estimate);
  const found = fitStructure({ response, design, structure: own, estimate, hooks });
  const at = model.target && found.ok ? thetaFor(model.target, found.value) : null;
  if (!at) throw new RangeError('the target was fitted before');
  return shapeAt(model.target as Structure, at);
}

/** Without the cells brought in whose category or class the used cells do not know. */
function withKnownLevels(limited: LimitedCells, plan: Plan): LimitedCells {
  const { cells, usedAt } = limited;
  const inTerms = plan.terms.flatMap(factorsOf);
  const inParts = [plan.variance, ...(typeof plan.target === 'string' ? [] : [plan.target])].flatMap(({ parts }) =>
    parts.flatMap((part) => (part.kind === 'log-linear' ? part.terms : part.kind === 'per-class' ? [part] : [])),
  );
  const columns = new Set(
    [...inTerms, ...inParts].flatMap((one) => ('as' in one || 'kind' in one ? [one.column] : [])),
  );
  let rows = [...usedAt.keys()];
  for (const column of columns) {
    const texts = cells.texts(column);
    const known = new Set(rows.flatMap((g) => ((usedAt[g] as number) >= 0 ? [texts[g] as string] : [])));
    rows = rows.filter((g) => known.has(texts[g] as string));
  }
  if (rows.length === cells.count) return limited;
  const pick = (values: Float64Array): Float64Array => Float64Array.from(rows, (g) => values[g] as number);
  const gone = new Set(rows);
  const outside = cells.labels.filter((_, g) => !gone.has(g));
  return {
    cells: takeCells(cells, rows),
    usedAt: Int32Array.from(rows, (g) => usedAt[g] as number),
    outcome: { low: pick(limited.outcome.low), high: pick(limited.outcome.high) },
    covariates: limited.covariates.map(({ name, low, high }) => ({ name, low: pick(low), high: pick(high) })),
    outside: [...limited.outside, ...outside],
  };
}

/** One end of every outcome on the scale of the fit: open where that scale has no place for it. */
function responseAt({ cells, outcome }: LimitedCells, end: 'low' | 'high'): Float64Array {
  const values = outcome[end];
  const open = end === 'low' ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY;
  const takes = (y: number): boolean => Math.abs(y) <= LARGEST && hasPlace(cells, y);
  const inside = values.map((y, g) => (takes(y) ? y : (cells.outcome.high[g] as number)));
  const scaled = onOutcomeScale(movedCells(cells, { outcome: inside, covariates: new Map() }));
  if (!scaled.ok) return values.map(() => open);
  const { high } = scaled.value.response;
  return high.map((y, g) => (takes(values[g] as number) ? y : open));
}

function hasPlace({ plan, effectiveSize }: Cells, y: number): boolean {
  if (plan.outcomeScale === 'identity' || isLinked(plan)) return true;
  if (plan.outcomeScale === 'log') return y > 0;
  const most = plan.roles.outcomeUnit === 'percent' ? 100 : 1;
  const halves = effectiveSize !== null && (plan.addedHalf === 'all-cells' || plan.addedHalf === 'extreme-cells');
  return halves ? y >= 0 && y <= most : y > 0 && y < most;
}
