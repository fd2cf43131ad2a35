import { isLinked, isOfCounts } from '../protocol/linked';
import type { VarianceParameter } from '../protocol/result';
import { type CautionSources, type Found, largestShift } from './caution-sources';

/** Given errors on fewer degrees of freedom are noisy weights. */
const NOISY_BELOW = 30;

/** A given matrix on fewer degrees of freedom than so many times its cells is a noisy inverse. */
const TIMES_CELLS = 10;

/** What the variance structure, its parameters and the weights give cause to say. */
export function cautionsOfStructure(sources: CautionSources): Found[] {
  const { pieces, hardlySeparate } = sources;
  const { fit, betweenRules } = pieces;
  const found: Found[] = [...concentration(sources)];
  for (const parameter of fit.variance) if (parameter.atBoundary) found.push(atBoundary(parameter, pieces));

  const q = fit.knappHartungQ;
  const between = fit.variance.find(({ name }) => name === 'tau2');
  if (q !== null && q < 1)
    found.push({ code: 'knapp-hartung-narrowed', facts: { q, betweenAtZero: between?.estimate === 0 } });

  const empty = betweenRules.filter(({ qLow, qHigh }) => qLow === null && qHigh === null);
  if (empty.length > 0) found.push({ code: 'between-interval-empty', facts: { rules: empty.map(({ rule }) => rule) } });
  if (hardlySeparate) found.push({ code: 'parameters-hardly-separate', facts: hardlySeparate });
  return [...found, ...givenErrors(sources), ...countedErrors(sources), ...structuresTried(pieces)];
}

/** Effective cells below half of the cells. */
function concentration({ pieces }: CautionSources): Found[] {
  const { effectiveCells, cells, beam, fit } = pieces;
  if (effectiveCells === null || effectiveCells >= cells.length / 2) return [];
  const heaviest = cells.reduce((a, b) => (b.weightShare > a.weightShare ? b : a));
  const moves = beam.flatMap(({ term, heaviest: { change } }) => (change ? [{ term, to: change.estimate }] : []));
  return [
    {
      code: 'weights-concentrated',
      facts: {
        effectiveCells,
        cells: cells.length,
        heaviest: heaviest.label,
        heaviestShare: heaviest.weightShare,
        shift: largestShift(fit, moves),
      },
    },
  ];
}

function atBoundary({ name }: VarianceParameter, { betweenRules, fit }: CautionSources['pieces']): Found {
  const others = name === 'tau2' ? betweenRules.filter(({ tau2 }) => tau2 !== null && tau2 > 0) : [];
  const moves = others.flatMap(({ coefficients }) =>
    coefficients.map(({ term, estimate }) => ({ term, to: estimate })),
  );
  return {
    code: 'variance-at-boundary',
    facts: {
      name,
      rules: others.map(({ rule, tau2 }) => ({ rule, tau2: tau2 as number })),
      shift: largestShift(fit, moves),
    },
  };
}

/** Counts on a transformed scale: weights from the observed outcome, and halves where a logit would not exist without. */
function countedErrors({ plan, cells }: CautionSources): Found[] {
  const found: Found[] = [];
  const transformed = plan.outcomeScale !== 'identity' && !isLinked(plan);
  if (transformed && isOfCounts(plan))
    found.push({ code: 'errors-from-outcome', facts: { cause: 'minimum-chi-square' } });
  const labels = cells.labels.filter((_, g) => (cells.addedHalves?.[g] ?? 0) > 0);
  const to = plan.addedHalf;
  if (labels.length > 0 && (to === 'extreme-cells' || to === 'all-cells'))
    found.push({ code: 'halves-added', facts: { to, cells: labels.length, labels } });
  return found;
}

function givenErrors({ plan, pieces }: CautionSources): Found[] {
  const given = plan.variance.parts.find(({ kind }) => kind === 'given' || kind === 'matrix');
  if (!given) return [];
  const found: Found[] = [];
  const { errorFreedom } = pieces.fit;
  if (errorFreedom && given.kind === 'matrix')
    found.push({ code: 'matrix-estimated', facts: matrixFacts(errorFreedom.low, pieces.cells.length) });
  else if (errorFreedom)
    found.push({ code: 'errors-estimated', facts: { ...errorFreedom, noisy: errorFreedom.median < NOISY_BELOW } });
  else found.push({ code: 'errors-taken-as-exact', facts: { cells: pieces.cells.length } });

  const { errorKind, outcomeUnit, count } = plan.roles;
  if (plan.outcomeScale !== 'identity')
    found.push({ code: 'errors-from-outcome', facts: { cause: plan.outcomeScale } });
  else if (errorKind === 'cv') found.push({ code: 'errors-from-outcome', facts: { cause: 'cv' } });
  else if (count !== null) found.push({ code: 'errors-from-outcome', facts: { cause: 'count' } });
  else if (outcomeUnit !== 'number') found.push({ code: 'errors-from-outcome', facts: { cause: 'share' } });
  return found;
}

function matrixFacts(freedom: number, cells: number) {
  return { freedom, cells, inverted: freedom > cells, noisy: freedom < TIMES_CELLS * cells };
}

/** Intervals ignore that a structure was chosen among several. */
function structuresTried({ beside, fit }: CautionSources['pieces']): Found[] {
  if (beside.length === 0) return [];
  const ranges = fit.coefficients.map(({ term, estimate }, j) => {
    const all = [estimate, ...beside.flatMap(({ coefficients }) => coefficients[j]?.estimate ?? [])];
    return { term, low: Math.min(...all), high: Math.max(...all) };
  });
  return [{ code: 'structures-tried', facts: { tried: 1 + beside.length, ranges } }];
}
