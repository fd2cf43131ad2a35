import { freeParameters, interiorPoint, isVariance, type Parameter, type Structure } from '../model/structure';
import { done, type Outcome, refuse } from '../protocol/outcome';
import { type Arrival, bestScale, climb, type Place } from './ascent';
import type { Climb } from './ascent-step';
import { leavingBoundary, onFace } from './follow';
import { heightAt } from './likelihood';
import { freedomOf } from './likelihood-place';
import { polished } from './polish';
import { searchForm } from './search-form';
import { canVanish, growsTogether, leftRange, sizeAmongAll, withoutIdle } from './search-space';
import { startsOf } from './starts';

/** Climbs at most from the inside and, each, from a boundary. */
const CLIMBS = 6;
const CLIMBS_ON_FACE = 3;
const CLIMBS_OF_CHECK = 3;
/** Up to so many boundaries all of their combinations are searched from a grid of their own; beyond, each from the best start, and whatever climbs lead to. */
const ALL_FACES = 2;
/** More classes than this are not each tried at 0 unless a climb led there. */
const MANY_CLASSES = 4;
/** An interior maximum must be this much higher than the boundary to be told from it, where the boundary is a maximum itself. */
const HIGHER = 1e-10;
/** A climb that was lost this much higher than any maximum was on its way to something that is none of them. */
const FAR_HIGHER = 1e-6;
/** A correlation this near the lower end of its range, as a share of it, has run there. */
const NEAR_LOW = 1e-6;
/** A variance below this share of the largest at the end of a lost climb has run to 0. */
const RUN_OUT = 1e-6;

/** The highest point of a likelihood over its parameters. */
export interface Maximum {
  /** In the order of structure.parameters, fixed ones included; the correlation of a part that is 0 at its middle value. */
  readonly theta: Float64Array;
  readonly logLikelihood: number;
  /** Names of the parameters that ended at 0. */
  readonly atBoundary: readonly string[];
  readonly startsTried: number;
}

/** A search: the likelihood in its search form, the way back to the plan's parameters, and faces that were searched before. */
interface Search extends Climb {
  readonly from?: Float64Array;
  readonly brief?: boolean;
  readonly outward: (theta: Float64Array) => Float64Array;
  readonly depth: number;
  readonly faces: Map<string, Found>;
}

/** What a search found, and how high a climb stood that was lost where it found nothing. */
interface Found {
  readonly top: Outcome<Maximum>;
  readonly lostAt: number;
}

/**
 * Maximises the full, restricted or pseudo-likelihood over the free variance parameters.
 *
 * Several starts from a grid, and the boundaries at which a variance that another part can stand in for is 0, or a correlation from 0 on; the
 * highest is kept, and its last digits are taken from the score.
 * rows: prepared by `likelihoodRows` or `heldRows`; structure: may differ from the one they were prepared with in what is fixed, so that a
 * profile likelihood is the same call with `withFixed`. from: one start instead of the grid; brief: few starts, and each boundary from the best of
 * them, as a check of a maximum that is known.
 * Refuses `nothing-left-over` where the residuals are no more than rounding, and `no-convergence` with what it last saw: also where variances at
 * fixed parameters cannot be computed with.
 *
 * Source: Harville 1977; Self & Liang 1987 for the boundary.
 */
export function maximise(model: Climb & { readonly from?: Float64Array; readonly brief?: boolean }): Outcome<Maximum> {
  const { rows, structure: own, from } = model;
  if (model.hooks?.cancelled()) return refuse('cancelled', {});
  const { structure, inward, outward } = searchForm(withoutIdle(rows.structureOf(own)));
  const faces = new Map<string, Found>();
  const search = { ...model, structure, outward, depth: 0, faces, ...(from && { from: inward(from) }) };
  if (freeParameters(structure).length === 0) return fixedPoint(search);
  if (rows.perfect || freedomOf(model) <= 0 || rows.cells === rows.terms)
    return refuse('nothing-left-over', { cells: rows.cells, coefficients: rows.terms }, null);
  const found = searched(search).top;
  if (!found.ok) return found;
  const place = model.heightOnly ? found.value : polished(faceOf(search, found.value.atBoundary), found.value);
  return done({ ...found.value, ...place, theta: outward(place.theta) });
}

/** The likelihood with the parameters at 0 that ended there. */
function faceOf(search: Search, atBoundary: readonly string[]): Climb {
  const structure = atBoundary.reduce(
    (left, name) =>
      onFace(
        left,
        left.parameters.findIndex((parameter) => parameter.name === name),
      ),
    search.structure,
  );
  return { rows: search.rows, restricted: search.restricted, structure };
}

function searched(search: Search): Found {
  const { structure, hooks } = search;
  const free = freeParameters(structure);
  if (free.length === 0) return settled(fixedPoint(search));
  if (free.length === 1 && growsTogether(structure)) return settled(closedForm(search));
  if (hooks?.cancelled()) return settled(refuse('cancelled', {}));
  const starts = search.from ? [search.from] : startsOf(search, climbsOf(search));
  const arrivals: Arrival[] = [];
  const visit = (start: Float64Array) => {
    if (!hooks?.cancelled()) arrivals.push(climb(search, start));
  };
  starts.forEach(visit);
  const edges = edgesOf(search, arrivals).map((index) =>
    edgeAt(search, index, bestOf(arrivals).top?.theta ?? starts[0]),
  );
  for (const { inside } of edges) inside.forEach(visit);
  return hooks?.cancelled() ? settled(refuse('cancelled', {})) : highest(search, arrivals, edges);
}

function settled(top: Outcome<Maximum>): Found {
  return { top, lostAt: -Infinity };
}

function climbsOf({ depth, brief }: Search): number {
  if (brief) return CLIMBS_OF_CHECK;
  return depth === 0 ? CLIMBS : CLIMBS_ON_FACE;
}

/** The boundaries to search: all of them from the inside, and in any case those that a climb led to. */
function edgesOf({ structure, depth, brief }: Search, arrivals: readonly Arrival[]): number[] {
  const able = canVanish(structure);
  const reached = arrivals.flatMap((arrival) => (arrival.ended === 'boundary' ? [arrival.parameter] : []));
  const classes = able.filter((i) => structure.parameters[i]?.role === 'class');
  const own = classes.length > MANY_CLASSES ? able.filter((i) => !classes.includes(i)) : able;
  const systematic = own.length <= ALL_FACES || (depth === 0 && !brief) ? own : [];
  return able.filter((i) => systematic.includes(i) || reached.includes(i));
}

/** The best point with one parameter at 0, and a start just inside where the likelihood rises from there. */
interface Edge extends Found {
  readonly name: string;
  readonly inside: readonly Float64Array[];
}

function edgeAt(search: Search, index: number, start: Float64Array | undefined): Edge {
  const { faces, from: _, ...open } = search;
  const short = search.brief || canVanish(search.structure).length > ALL_FACES;
  const rest = short && start ? { ...open, from: start.with(index, 0) } : open;
  const structure = onFace(search.structure, index);
  const key = structure.parameters.flatMap(({ name, fixed }) => (fixed === 0 ? [name] : [])).join('\n');
  const found = faces.get(key) ?? searched({ ...rest, faces, structure, depth: search.depth + 1 });
  faces.set(key, found);
  const { top } = found;
  const name = structure.parameters[index]?.name as string;
  return { ...found, name, inside: top.ok ? leavingBoundary(search, index, top.value) : [] };
}

function fixedPoint(search: Search): Outcome<Maximum> {
  const theta = Float64Array.from(search.structure.parameters, (parameter) => parameter.fixed as number);
  const at = heightAt({ ...search, theta });
  if (!at) return notComputable(search, theta);
  return done({ theta, logLikelihood: at.logLikelihood, atBoundary: [], startsTried: 0 });
}

/** One scale over all of Omega and nothing else: the mean weighted square. */
function closedForm(search: Search): Outcome<Maximum> {
  const start = interiorPoint(search.structure);
  const best = bestScale(search, start);
  if (!best) return notComputable(search, start);
  return done({ ...best, atBoundary: [], startsTried: 1 });
}

function highest(search: Search, arrivals: readonly Arrival[], edges: readonly Edge[]): Found {
  const edge = bestEdge(edges);
  const standing = arrivals.filter((arrival) => !fitsOneGroup(search, arrival));
  const { top, lost } = bestOf(standing.length > 0 || edge ? standing : arrivals);
  const startsTried = edges.reduce(
    (sum, one) => sum + (one.top.ok ? Math.max(1, one.top.value.startsTried) : 0),
    arrivals.length,
  );
  const nowhere = (): Found => ({
    top: notFound(search, lost ?? arrivals[0]),
    lostAt: lost?.logLikelihood ?? -Infinity,
  });
  const astray = edges.reduce<Edge | null>(
    (most, one) => (one.lostAt > (most?.lostAt ?? -Infinity) ? one : most),
    null,
  );
  const highestFound = Math.max(top?.logLikelihood ?? -Infinity, edge?.logLikelihood ?? -Infinity);
  const lostAt = Math.max(lost?.logLikelihood ?? -Infinity, astray?.lostAt ?? -Infinity);
  if (lostAt > highestFound + FAR_HIGHER) return astray?.lostAt === lostAt ? astray : nowhere();
  if (top && (!edge || top.logLikelihood > edge.logLikelihood + (edge.rises ? -HIGHER : HIGHER)))
    return settled(done({ theta: top.theta, logLikelihood: top.logLikelihood, atBoundary: [], startsTried }));
  if (edge && !(edge.rises && lost)) {
    const { theta, logLikelihood, atBoundary } = edge;
    return settled(done({ theta, logLikelihood, atBoundary, startsTried }));
  }
  return lost ? nowhere() : (edges.find((one) => !one.top.ok) ?? nowhere());
}

/**
 * True where a climb ran to the lower end of an equal correlation while coefficients were free: there the mean of the largest group has no variance
 * left, the fit goes through it, and the full likelihood grows without bound on any data. It stands for nothing that the data say.
 */
function fitsOneGroup({ structure, restricted, rows }: Search, arrival: Arrival): boolean {
  if (arrival.ended !== 'lost' || restricted || rows.terms === 0) return false;
  return structure.parts.some(({ part, rhoAt }) => {
    const rho = structure.parameters[rhoAt];
    if (part.link?.kind !== 'exchangeable' || !rho || rho.fixed !== null) return false;
    return (arrival.theta[rhoAt] as number) - rho.low < NEAR_LOW * (rho.high - rho.low);
  });
}

/** The highest maximum that climbs ended at, and the highest point at which one was lost. */
function bestOf(arrivals: readonly Arrival[]): { top: Place | null; lost: Extract<Arrival, { ended: 'lost' }> | null } {
  let top: Place | null = null;
  let lost: Extract<Arrival, { ended: 'lost' }> | null = null;
  for (const arrival of arrivals) {
    if (arrival.ended === 'maximum' && (!top || arrival.logLikelihood > top.logLikelihood)) top = arrival;
    if (arrival.ended === 'lost' && (!lost || arrival.logLikelihood > lost.logLikelihood)) lost = arrival;
  }
  return { top, lost };
}

/** The highest of the boundaries; rises: a boundary from which the likelihood rises inward. */
function bestEdge(edges: readonly Edge[]): (Maximum & { readonly rises: boolean }) | null {
  let best: (Maximum & { readonly rises: boolean }) | null = null;
  for (const { name, top, inside } of edges) {
    if (!top.ok || (best && best.logLikelihood >= top.value.logLikelihood)) continue;
    best = { ...top.value, atBoundary: [...top.value.atBoundary, name], rises: inside.length > 0 };
  }
  return best;
}

/** A point whose variances run over or under, or weigh so unevenly that nothing is left of a column. */
function notComputable({ structure, outward }: Search, theta: Float64Array): Outcome<never> {
  const at = Math.max(0, structure.exponentAt);
  const value = outward(theta)[at] as number;
  const facts = { parameter: structure.parameters[at]?.name as string, value, iterations: 0 };
  return refuse('no-convergence', facts, '/variance');
}

/** Names the parameter that ran away. */
function notFound({ structure, outward }: Search, arrival: Arrival | undefined): Outcome<never> {
  const index = arrival?.ended === 'boundary' ? arrival.parameter : runaway(structure, arrival?.theta ?? null);
  return refuse(
    'no-convergence',
    {
      parameter: structure.parameters[index]?.name as string,
      value: arrival?.ended === 'lost' ? (outward(arrival.theta)[index] as number) : 0,
      iterations: arrival?.rounds ?? 0,
    },
    '/variance',
  );
}

/** Out of its range, else a variance that has run to 0, else the exponent or the last gamma, else the last of all. */
function runaway(structure: Structure, theta: Float64Array | null): number {
  const free = freeParameters(structure);
  const of = (role: Parameter['role']) => free.filter((i) => structure.parameters[i]?.role === role).at(-1);
  const left = theta ? leftRange(structure, theta) : -1;
  if (left >= 0) return left;
  const shares = free.map((i) =>
    theta && isVariance(structure.parameters[i] as Parameter) ? sizeAmongAll(structure, theta, i) : 1,
  );
  const least = shares.reduce((most, share) => Math.min(most, share), 1);
  if (least < RUN_OUT) return free[shares.indexOf(least)] as number;
  return of('exponent') ?? of('gamma') ?? (free.at(-1) as number);
}
