import { freeParameters, interiorPoint, type Structure, withFixed } from '../model/structure';
import { done, type Outcome, refuse } from '../protocol/outcome';
import type { Hooks } from '../protocol/source';
import { type Arrival, bestScale, climb, type Place, scalesTogether } from './ascent';
import type { Climb } from './ascent-step';
import { leavingBoundary } from './follow';
import { freedomOf, heightAt } from './likelihood';
import { startsOf } from './starts';

/** Climbs at most, besides those that begin on a boundary. */
const CLIMBS = 4;
/** An interior maximum must be this much higher than the boundary to be told from it, where the boundary is a maximum itself. */
const HIGHER = 1e-10;
/** A climb that was lost this much higher than any maximum was on its way to something that is none of them. */
const FAR_HIGHER = 1e-6;

/** The highest point of a likelihood over its parameters. */
export interface Maximum {
  /** In the order of structure.parameters, fixed ones included. */
  readonly theta: Float64Array;
  readonly logLikelihood: number;
  /** Names of the parameters that ended at 0. */
  readonly atBoundary: readonly string[];
  readonly startsTried: number;
}

/**
 * Maximises the full, restricted or pseudo-likelihood over the free variance parameters.
 *
 * Several starts from a grid, and the boundaries tau^2 = 0 and, beside a between part, phi = 0; the highest is kept.
 * rows: prepared by `likelihoodRows` or `heldRows`; structure: may differ from the one they were prepared with in what is fixed, so that a
 * profile likelihood is the same call with `withFixed`. from: one start instead of the grid.
 * Refuses `nothing-left-over` where the residuals are no more than rounding, and `no-convergence` with what it last saw: also where variances at
 * fixed parameters cannot be computed with.
 *
 * Source: Harville 1977; Self & Liang 1987 for the boundary.
 */
export function maximise(model: Climb & { readonly hooks?: Hooks; readonly from?: Float64Array }): Outcome<Maximum> {
  const { rows, structure, hooks } = model;
  if (hooks?.cancelled()) return refuse('cancelled', {});
  const free = freeParameters(structure);
  if (free.length === 0) return fixedPoint(model);
  if (rows.perfect || freedomOf(model) <= 0 || rows.cells === rows.terms)
    return refuse('nothing-left-over', { cells: rows.cells, coefficients: rows.terms }, null);
  if (free.length === 1 && scalesTogether(structure)) return closedForm(model);
  const edges = boundaries(structure).map((name) => edgeAt(model, name));
  const starts = model.from ? [model.from] : startsOf(model, CLIMBS);
  const arrivals: Arrival[] = [];
  for (const start of [...starts, ...edges.flatMap(({ inside }) => inside)]) {
    if (hooks?.cancelled()) return refuse('cancelled', {});
    arrivals.push(climb(model, start));
  }
  return highest(model, arrivals, edges);
}

/** The best point with one part at 0, and a start just inside where the likelihood rises from there. */
interface Edge {
  readonly name: string;
  readonly top: Outcome<Maximum>;
  readonly inside: readonly Float64Array[];
}

function edgeAt(model: Climb & { readonly hooks?: Hooks }, name: string): Edge {
  const { rows, structure, restricted, hooks } = model;
  const top = maximise({ rows, structure: withFixed(structure, name, 0), restricted, ...(hooks && { hooks }) });
  return { name, top, inside: top.ok ? leavingBoundary(model, name, top.value) : [] };
}

function fixedPoint(model: Climb): Outcome<Maximum> {
  const theta = Float64Array.from(model.structure.parameters, (parameter) => parameter.fixed as number);
  const at = heightAt({ ...model, theta });
  if (!at) return notComputable(model, theta);
  return done({ theta, logLikelihood: at.logLikelihood, atBoundary: [], startsTried: 0 });
}

/** One scale over all of Omega and nothing else: the mean weighted square. */
function closedForm(model: Climb): Outcome<Maximum> {
  const start = interiorPoint(model.structure);
  const best = bestScale(model, start);
  if (!best) return notComputable(model, start);
  return done({ ...best, atBoundary: [], startsTried: 1 });
}

/** The parameters that may end at 0: each part that another one can stand in for. */
function boundaries({ parameters, scaleAt, betweenAt, exponentAt }: Structure): string[] {
  const [scale, between] = [parameters[scaleAt], parameters[betweenAt]];
  const names: string[] = [];
  if (between?.fixed === null && scale?.fixed !== 0) names.push(between.name);
  const stays = between !== undefined && between.fixed !== 0;
  if (scale?.fixed === null && stays && (exponentAt < 0 || parameters[exponentAt]?.fixed !== null))
    names.push(scale.name);
  return names;
}

function highest(model: Climb, arrivals: readonly Arrival[], edges: readonly Edge[]): Outcome<Maximum> {
  let startsTried = arrivals.length;
  let edge: (Maximum & { readonly rises: boolean }) | null = null;
  for (const { name, top, inside } of edges) {
    if (!top.ok) continue;
    startsTried += Math.max(1, top.value.startsTried);
    if (edge && edge.logLikelihood >= top.value.logLikelihood) continue;
    edge = { ...top.value, atBoundary: [...top.value.atBoundary, name], rises: inside.length > 0 };
  }
  let top: Place | null = null;
  let lost: Extract<Arrival, { ended: 'lost' }> | null = null;
  for (const arrival of arrivals) {
    if (arrival.ended === 'maximum' && (!top || arrival.logLikelihood > top.logLikelihood)) top = arrival;
    if (arrival.ended === 'lost' && (!lost || arrival.logLikelihood > lost.logLikelihood)) lost = arrival;
  }
  const highestFound = Math.max(top?.logLikelihood ?? -Infinity, edge?.logLikelihood ?? -Infinity);
  if (lost && lost.logLikelihood > highestFound + FAR_HIGHER) return notFound(model, lost);
  if (top && (!edge || top.logLikelihood > edge.logLikelihood + (edge.rises ? -HIGHER : HIGHER)))
    return done({ theta: top.theta, logLikelihood: top.logLikelihood, atBoundary: [], startsTried });
  if (edge && !(edge.rises && lost)) {
    const { theta, logLikelihood, atBoundary } = edge;
    return done({ theta, logLikelihood, atBoundary, startsTried });
  }
  const failed = edges.find((other) => !other.top.ok)?.top;
  return lost || !failed || failed.ok ? notFound(model, lost ?? arrivals[0]) : failed;
}

/** A point whose variances run over or under, or weigh so unevenly that nothing is left of a column. */
function notComputable({ structure }: Climb, theta: Float64Array): Outcome<never> {
  const at = Math.max(0, structure.exponentAt);
  const facts = { parameter: structure.parameters[at]?.name as string, value: theta[at] as number, iterations: 0 };
  return refuse('no-convergence', facts, '/variance');
}

/** Names the parameter that ran away: to 0, or else the exponent where there is one. */
function notFound({ structure }: Climb, arrival: Arrival | undefined): Outcome<never> {
  const free = freeParameters(structure);
  const vanished = arrival?.ended === 'boundary' ? arrival.parameter : -1;
  const running = free.includes(structure.exponentAt) ? structure.exponentAt : (free.at(-1) as number);
  const index = vanished >= 0 ? vanished : running;
  return refuse(
    'no-convergence',
    {
      parameter: structure.parameters[index]?.name as string,
      value: arrival?.ended === 'lost' ? (arrival.theta[index] as number) : 0,
      iterations: arrival?.rounds ?? 0,
    },
    '/variance',
  );
}
