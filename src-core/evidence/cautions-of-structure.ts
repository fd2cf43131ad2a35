import type { VarianceParameter } from '../protocol/result';
import { type CautionSources, type Found, largestShift } from './caution-sources';

/** Given errors on fewer degrees of freedom are noisy weights. */
const NOISY_BELOW = 30;

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
  return [...found, ...givenErrors(sources), ...structuresTried(pieces)];
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

function givenErrors({ plan, pieces }: CautionSources): Found[] {
  const given = plan.variance.parts.find(({ kind }) => kind === 'given' || kind === 'matrix');
  if (!given) return [];
  const found: Found[] = [];
  const { errorFreedom } = pieces.fit;
  if (errorFreedom)
    found.push({ code: 'errors-estimated', facts: { ...errorFreedom, noisy: errorFreedom.median < NOISY_BELOW } });
  else found.push({ code: 'errors-taken-as-exact', facts: { cells: pieces.cells.length } });

  const { errorKind, outcomeUnit, count } = plan.roles;
  if (plan.outcomeScale === 'log') found.push({ code: 'errors-from-outcome', facts: { cause: 'log' } });
  else if (errorKind === 'cv') found.push({ code: 'errors-from-outcome', facts: { cause: 'cv' } });
  else if (count !== null) found.push({ code: 'errors-from-outcome', facts: { cause: 'count' } });
  else if (outcomeUnit !== 'number') found.push({ code: 'errors-from-outcome', facts: { cause: 'share' } });
  return found;
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
