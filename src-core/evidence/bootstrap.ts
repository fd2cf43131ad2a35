import { factored } from '../algebra/factored';
import { underStructure } from '../estimate/fit';
import type { Fitted } from '../estimate/fitted';
import { follow, leavingBoundary } from '../estimate/follow';
import { heightAt } from '../estimate/likelihood';
import type { LikelihoodRows } from '../estimate/likelihood-rows';
import { omegaAt, type Structure } from '../model/structure';
import { type Random, seeded } from '../numbers/random';
import type { BootstrapBoundary } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import { bestWithout, likelihoodOfFit, without } from './best-without';
import { responsesFrom } from './bootstrap-draws';
import { gridRatioOf } from './bootstrap-grid';
import { screenFor } from './bootstrap-screen';

export const REPLICATIONS = 999;
const SEED = 1;
/** Work that all draws may take together, in multiplications. */
const WORK = 5e8;
/** Likelihoods looked at in a climb, and multiplications a row and squared term in each. */
const LOOKS = 100;
const FEWEST = 99;
/** A statistic this close below the observed one counts as equal to it. */
const TIE = 1e-9;
/** Multiples of the fitted values at which a likelihood that does not rise from its boundary is looked at all the same. */
const FURTHER = [0.3, 1, 3];

/**
 * Likelihood ratio of parameters that vanish, against draws from the fit without them.
 *
 *     T = 2 (l at the fit - l at its best without them);  p = (1 + number of T* >= T) / (1 + draws)
 *
 * T*: of normal errors with the covariance of the best fit without the parameters, by the method's own likelihood, which no coefficient enters. For one
 * variance beside a known sampling shape both maxima of a draw are found; for several variances, correlations and cells that go together p compares the ratio
 * on a fixed grid of them, the data's and the draws' alike (`gridRatioOf`); beside exponents, classes and gammas both maxima are climbed to. Holds
 * where no mixture of chi-squares does, and at few cells where it is conservative.
 *
 * zero: names of free variances or correlations. 999 draws with seed 1 unless said; fewer where cells are many (the work is bounded), then at least
 * 99; with more cells than that allows null. A statistic of 0 needs no draw: p is 1. Null under methods other than full and restricted, where a maximum
 * is not found, and of a cancelled run.
 *
 * Source: Davison & Hinkley 1997, chapter 4; Self & Liang 1987 for what it stands in for.
 */
export function bootstrapBoundary(of: {
  readonly fitted: Fitted;
  readonly zero: readonly string[];
  readonly replications?: number;
  readonly seed?: number;
  readonly hooks?: Hooks | undefined;
}): BootstrapBoundary | null {
  const { fitted, zero, hooks, seed = SEED, replications: asked = REPLICATIONS } = of;
  const { method } = fitted.estimate;
  const { structure, theta } = fitted;
  if ((method !== 'full' && method !== 'restricted') || fitted.residualFreedom < 1 || structure.meanDependent)
    return null;
  const likelihood = likelihoodOfFit(fitted);
  const { rows, restricted } = likelihood;
  const whole = rows.perfect ? null : heightAt({ ...likelihood, theta });
  if (!whole) return null;
  const pair: Pair = { whole: structure, none: without(structure, zero), zero, restricted };
  const found = bestWithout(likelihood, zero, hooks);
  if (!found.ok) return null;
  const gone = zero.every((name) => theta[structure.parameters.findIndex((one) => one.name === name)] === 0);
  const statistic = gone ? 0 : Math.max(0, 2 * (whole.logLikelihood - found.value.logLikelihood));
  const told = { zero: [...zero], likelihood: method, statistic, seed };
  if (statistic <= TIE)
    return { ...told, statistic: 0, replications: asked, count: asked, p: 1, floor: 1 / (1 + asked) };
  const cancelled = hooks?.cancelled;
  const trial = trialOf({ fitted, rows, pair, statistic, none: found.value.theta, random: seeded(seed), cancelled });
  const replications = trial ? Math.min(asked, Math.floor(WORK / trial.work)) : 0;
  if (!trial || (replications < FEWEST && replications < asked)) return null;
  let count = 0;
  for (let i = 0; i < replications; i++) {
    if (hooks?.cancelled()) return null;
    if (i % 50 === 0) hooks?.progress('evidence', i / replications);
    if (trial.reaches()) count++;
  }
  const floor = 1 / (1 + replications);
  return { ...told, replications, count, p: (1 + count) * floor, floor };
}

/** One draw after another: does its ratio reach the data's? work: of one draw, in multiplications. */
interface Trial {
  readonly reaches: () => boolean;
  readonly work: number;
}

function trialOf(of: {
  readonly fitted: Fitted;
  readonly rows: LikelihoodRows;
  readonly pair: Pair;
  readonly statistic: number;
  /** The best fit without the parameters. */
  readonly none: Float64Array;
  readonly random: Random;
  readonly cancelled: (() => boolean) | undefined;
}): Trial | null {
  const { fitted, rows, pair, statistic, none, random } = of;
  const { theta } = fitted;
  const index = pair.zero.length === 1 ? pair.whole.parameters.findIndex(({ name }) => name === pair.zero[0]) : -1;
  const value = theta[index] ?? 0;
  const screen = value > 0 ? screenFor({ rows, ...pair, index, theta: none, fitted: value, statistic }) : null;
  const { length } = rows.cellOf;
  if (screen || !pair.whole.links) {
    const draw = responsesFrom({ rows, structure: pair.none, theta: none, random });
    const climbed = (drawn: LikelihoodRows) =>
      ratioOf(pair, { rows: drawn, none, fitted: theta }) >= statistic * (1 - TIE);
    if (screen)
      return {
        work: 15 * length * (rows.terms + 1),
        reaches: () => {
          const drawn = draw();
          const seen = screen(drawn);
          return seen === 'reaches' || (seen === 'open' && climbed(drawn));
        },
      };
    const byGrid = gridTrial(of);
    return byGrid ?? { work: LOOKS * length * (rows.terms + 1) * (rows.terms + 1), reaches: () => climbed(draw()) };
  }
  return gridTrial(of);
}

function gridTrial({ fitted, pair, none, random, cancelled }: Parameters<typeof trialOf>[0]): Trial | null {
  const { whole: structure, zero, restricted } = pair;
  const grid = gridRatioOf({ fitted, structure, zero, restricted, theta: none, cancelled });
  const factoring = factored(omegaAt(pair.none, none));
  if (!grid || !factoring.ok) return null;
  const observed = grid.of(underStructure(fitted).residuals);
  const normals = new Float64Array(structure.count);
  return {
    work: grid.work,
    reaches: () => {
      for (let g = 0; g < normals.length; g++) normals[g] = random.normal();
      return grid.reaches(factoring.factor.unwhiten(normals), observed * (1 - TIE));
    },
  };
}

interface Pair {
  readonly whole: Structure;
  readonly none: Structure;
  readonly zero: readonly string[];
  readonly restricted: boolean;
}

/** 2 (l - l without) of one draw; 0 where nothing inside is higher. A maximum that is lost counts as the highest seen. */
function ratioOf(
  { whole, none, zero, restricted }: Pair,
  of: { readonly rows: LikelihoodRows; readonly none: Float64Array; readonly fitted: Float64Array },
): number {
  const { rows } = of;
  const lower = follow({ rows, structure: none, restricted, heightOnly: true }, of.none);
  if (!lower) return 0;
  const climbed = { rows, structure: whole, restricted, heightOnly: true };
  const places = zero.map((name) => whole.parameters.findIndex((parameter) => parameter.name === name));
  const starts = places.length === 1 ? leavingBoundary(climbed, places[0] as number, lower) : [];
  let highest = lower.logLikelihood;
  for (const start of [...starts, ...further(climbed, { places, lower, fitted: of.fitted })]) {
    const top = follow(climbed, start);
    if (top) highest = Math.max(highest, top.logLikelihood);
  }
  return 2 * (highest - lower.logLikelihood);
}

/** Points at multiples of the fitted values; for a single parameter only those that are higher than the boundary. */
function further(
  climbed: { readonly rows: LikelihoodRows; readonly structure: Structure; readonly restricted: boolean },
  of: {
    readonly places: readonly number[];
    readonly lower: { readonly theta: Float64Array; readonly logLikelihood: number };
    readonly fitted: Float64Array;
  },
): Float64Array[] {
  const { places, lower, fitted } = of;
  const starts = FURTHER.map((multiple) => {
    const theta = lower.theta.slice();
    for (const i of places) {
      const { role, high } = climbed.structure.parameters[i] as Structure['parameters'][number];
      const value = (fitted[i] as number) * multiple;
      theta[i] = role === 'correlation' ? Math.min(value, (high + (fitted[i] as number)) / 2) : value;
    }
    return theta;
  });
  if (places.length > 1) return starts.slice(1, 2);
  const heights = starts.map((theta) => heightAt({ ...climbed, theta })?.logLikelihood ?? -Infinity);
  const best = heights.reduce((most, height, i) => (height > (heights[most] as number) ? i : most), 0);
  return (heights[best] as number) > lower.logLikelihood ? [starts[best] as Float64Array] : [];
}
