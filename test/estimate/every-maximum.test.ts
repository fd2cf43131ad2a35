import { bestScale } from '@core/estimate/ascent';
import type { Climb } from '@core/estimate/ascent-step';
import { follow } from '@core/estimate/follow';
import { identificationOf } from '@core/estimate/identified';
import { likelihoodAt } from '@core/estimate/likelihood';
import { likelihoodRows } from '@core/estimate/likelihood-rows';
import { maximise } from '@core/estimate/maximise';
import { canVanish } from '@core/estimate/search-space';
import { designOf } from '@core/model/design';
import { learnTerms } from '@core/model/learn-terms';
import { freeParameters, interiorPoint, type Structure } from '@core/model/structure';
import { seeded } from '@core/numbers/random';
import type { Correlation, Part } from '@core/protocol/plan';
import { describe, expect, it } from 'vitest';
import { panelCells, structureOn } from '../model/every-structure';
import { open } from './fitting';

const none = { correlation: null };
const among: Correlation = { kind: 'exchangeable', by: ['region'] };
const inTime: Correlation = { kind: 'serial', by: ['region'], order: 'time' };
const byQuarter: Correlation = { kind: 'serial', by: ['region'], order: 'quarter' };
const sizes: Part = { kind: 'per-size', ...none };
const region: Part = { kind: 'shared', by: ['region'] };

/** Ten sums of parts, twenty problems each. */
const sums: readonly [string, Part[]][] = [
  ['per-class', [{ kind: 'per-class', column: 'kind', perSize: false, ...none }]],
  [
    'per-class per size + between',
    [
      { kind: 'per-class', column: 'kind', perSize: true, ...none },
      { kind: 'between', ...none },
    ],
  ],
  ['log-linear', [{ kind: 'log-linear', terms: [{ column: 'n', transform: 'log' }, { column: 'z' }], ...none }]],
  ['per-size, exchangeable', [{ kind: 'per-size', correlation: among }]],
  ['per-size, serial in whole steps', [{ kind: 'per-size', correlation: inTime }]],
  [
    'given + serial between',
    [
      { kind: 'given', scale: 'fixed', freedom: null, ...none },
      { kind: 'between', correlation: byQuarter },
    ],
  ],
  ['per-size + exchangeable between', [sizes, { kind: 'between', correlation: among }]],
  ['per-size + between + shared', [sizes, { kind: 'between', ...none }, region]],
  ['size-power, serial', [{ kind: 'size-power', exponent: 'estimate', correlation: inTime }]],
  ['per-size + two shared, crossed', [sizes, region, { kind: 'shared', by: ['kind'] }]],
];

/** A random point of the search: variances over twelve powers of e about the middle, or at 0 where they may be, the rest over its range. */
function anywhere(structure: Structure, middle: Float64Array, uniform: () => number): Float64Array {
  const able = canVanish(structure);
  return middle.map((value, i) => {
    const { role, low, high } = structure.parameters[i] as Structure['parameters'][number];
    if (able.includes(i) && uniform() < 0.15) return 0;
    if (role === 'correlation') return low + (high - low) * (0.001 + 0.998 * uniform());
    if (role === 'gamma') return value + 4 * (uniform() - 0.5);
    return role === 'exponent' ? 5 * uniform() - 2 : value * Math.exp(12 * uniform() - 7);
  });
}

function problemOf(parts: Part[], seed: number, restricted: boolean): { model: Climb; identified: boolean } {
  const cells = panelCells(24, seed);
  const structure = structureOn(cells, parts);
  const known = open(learnTerms({ terms: [{ column: 'x' }], intercept: true, cells }));
  const design = open(designOf(known, cells));
  const rows = likelihoodRows({ response: cells.outcome, design, structure });
  return { model: { rows, structure, restricted }, identified: identificationOf({ design, structure }).ok };
}

describe.each(sums)('%s', (_, parts) => {
  it('is not exceeded by 300 points anywhere or by climbs from the best of them, in 20 problems, and is stationary', () => {
    let found = 0;
    for (let seed = 1; seed <= 20; seed++) {
      const { model, identified } = problemOf(parts, seed, seed % 2 === 0);
      if (!identified) continue;
      const top = maximise(model);
      const { structure } = model;
      const { uniform } = seeded(seed);
      const middle = interiorPoint(structure);
      const places = Array.from({ length: 300 }, () => bestScale(model, anywhere(structure, middle, uniform)))
        .flatMap((place) => place ?? [])
        .sort((a, b) => b.logLikelihood - a.logLikelihood);
      const climbed = places.slice(0, 3).flatMap((place) => follow(model, place.theta) ?? []);
      const highest = Math.max(...[...places.slice(0, 1), ...climbed].map((place) => place.logLikelihood));
      if (!top.ok) {
        // Only a likelihood that rises to an open end of a range has no maximum here.
        expect(top.problems.map(({ code }) => code)).toEqual(['no-convergence']);
        continue;
      }
      found++;
      expect(highest - top.value.logLikelihood).toBeLessThan(1e-9);
      stationary(model, top.value.theta, top.value.atBoundary);
    }
    expect(found).toBeGreaterThan(9);
  });
});

function stationary(model: Climb, theta: Float64Array, atBoundary: readonly string[]): void {
  const { structure } = model;
  const idle = structure.parts.flatMap(({ at, part, rhoAt }) =>
    rhoAt >= 0 && part.parameters.every((_, i) => theta[at + i] === 0) ? [rhoAt] : [],
  );
  const at = likelihoodAt({ ...model, theta });
  for (const [a, i] of freeParameters(structure).entries()) {
    const name = structure.parameters[i]?.name as string;
    if (idle.includes(i) || structure.parts.some(({ rhoAt, at: first }) => idle.includes(rhoAt) && first === i))
      continue;
    const share = (at?.score[a] as number) / Math.sqrt(at?.information[a]?.[a] as number);
    if (!atBoundary.includes(name)) expect(Math.abs(share)).toBeLessThan(1e-9);
    else if (structure.parameters[i]?.role !== 'correlation') expect(share).toBeLessThan(1e-7);
  }
}
