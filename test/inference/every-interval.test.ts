import { fitStructure } from '@core/estimate/fit';
import { maximise } from '@core/estimate/maximise';
import { likelihoodsOf, ownLikelihood } from '@core/inference/likelihoods';
import { varianceParametersOf } from '@core/inference/variance-parameters';
import { designOf } from '@core/model/design';
import { learnTerms } from '@core/model/learn-terms';
import { withFixed } from '@core/model/structure';
import { chiSquareQuantile } from '@core/numbers/distributions';
import type { Correlation, Part } from '@core/protocol/plan';
import { describe, expect, it } from 'vitest';
import { open } from '../estimate/fitting';
import { panelCells, structureOn } from '../model/every-structure';

const none = { correlation: null };
const among: Correlation = { kind: 'exchangeable', by: ['region'] };
const inTime: Correlation = { kind: 'serial', by: ['region'], order: 'time' };
const byQuarter: Correlation = { kind: 'serial', by: ['region'], order: 'quarter' };

const structures: readonly [string, Part[]][] = [
  ['per-class per size', [{ kind: 'per-class', column: 'kind', perSize: true, ...none }]],
  ['log-linear', [{ kind: 'log-linear', terms: [{ column: 'n', transform: 'log' }], ...none }]],
  ['constant, exchangeable', [{ kind: 'constant', correlation: among }]],
  ['size-power, serial', [{ kind: 'size-power', exponent: 'estimate', correlation: inTime }]],
  [
    'given + between in quarters',
    [
      { kind: 'given', scale: 'fixed', freedom: null, ...none },
      { kind: 'between', correlation: byQuarter },
    ],
  ],
  [
    'matrix + shared',
    [
      { kind: 'matrix', file: 's.csv', scale: 'free', freedom: null },
      { kind: 'shared', by: ['region'] },
    ],
  ],
  [
    'per-size + between + shared',
    [
      { kind: 'per-size', ...none },
      { kind: 'between', ...none },
      { kind: 'shared', by: ['region'] },
    ],
  ],
];

const reach = chiSquareQuantile(0.95, 1);

describe.each(structures)('the interval of every variance parameter of %s', (_, parts) => {
  it.each(['full', 'restricted'] as const)(
    'ends where a search of everything else finds the fall that it names (%s)',
    (method) => {
      let ends = 0;
      for (let seed = 1; seed <= 6; seed++) {
        const cells = panelCells(30, seed);
        const structure = structureOn(cells, parts);
        const known = open(learnTerms({ terms: [{ column: 'x' }], intercept: true, cells }));
        const design = open(designOf(known, cells));
        const fitted = fitStructure({ response: cells.outcome, design, structure, estimate: { method } });
        if (!fitted.ok) continue;
        const likelihoods = likelihoodsOf(fitted.value);
        const maximum = ownLikelihood(likelihoods) as number;
        for (const parameter of varianceParametersOf(likelihoods, 0.95)) {
          const range = structure.parameters.find(({ name }) => name === parameter.name);
          for (const end of [parameter.low, parameter.high]) {
            // An open end of the range has no likelihood of its own.
            if (end === null || !range || end === range.high || (end === range.low && end !== 0)) continue;
            const held = withFixed(structure, parameter.name, end);
            const there = maximise({ rows: likelihoods.rows, structure: held, restricted: method === 'restricted' });
            const fall = 2 * (maximum - open(there).logLikelihood);
            if (end === 0) expect(fall).toBeLessThan(reach + 1e-8);
            else expect(Math.abs(fall - reach)).toBeLessThan(1e-8);
            ends++;
          }
          if (parameter.estimate !== null && parameter.low !== null)
            expect(parameter.low).toBeLessThanOrEqual(parameter.estimate);
          if (parameter.estimate !== null && parameter.high !== null)
            expect(parameter.high).toBeGreaterThanOrEqual(parameter.estimate);
        }
      }
      expect(ends).toBeGreaterThan(6);
    },
  );
});
