import { likelihoodAt } from '@core/estimate/likelihood';
import { heldRows, likelihoodRows } from '@core/estimate/likelihood-rows';
import { interiorPoint, omegaAt, type Structure } from '@core/model/structure';
import { joinAll } from '@core/model/structure-join';
import { classPart, type Link, levelPart, shapedPart, type VariancePart } from '@core/model/variance-part';
import { fromDoubles } from '@core/numbers/decimals';
import { log, pow } from '@core/numbers/elementary';
import { expect, it } from 'vitest';
import { draw } from './problems';

const cells = 240;
const problem = draw(12, cells, 4);
const groupsOf = (of: (g: number) => number): Int32Array => Int32Array.from({ length: cells }, (_, g) => of(g));
const shared = (name: string, group: Int32Array): VariancePart =>
  levelPart({
    kind: 'shared',
    parameter: { name: `omega2: ${name}`, role: 'shared' },
    base: new Float64Array(cells).fill(1),
    link: { kind: 'shared', group },
  });
const perSize = (link: Link | null): VariancePart =>
  levelPart({
    kind: 'per-size',
    parameter: { name: 'phi', role: 'scale' },
    base: problem.sizes.map((n) => 10 / n),
    link,
  });
const between = (link: Link | null): VariancePart =>
  levelPart({
    kind: 'between',
    parameter: { name: 'tau2', role: 'between' },
    base: new Float64Array(cells).fill(1),
    link,
  });
const tens = groupsOf((g) => (g * 7) % 24);
const exchangeable = (group: Int32Array): Link => ({ kind: 'exchangeable', group });

const structures: Record<string, { parts: VariancePart[]; rho?: number }> = {
  'one level': { parts: [perSize(null), shared('a', tens)] },
  'three levels inside each other': {
    parts: [
      perSize(null),
      shared(
        'a',
        groupsOf((g) => Math.floor(g / 4)),
      ),
      shared(
        'b',
        groupsOf((g) => Math.floor(g / 12)),
      ),
      shared(
        'c',
        groupsOf((g) => Math.floor(g / 120)),
      ),
    ],
  },
  'levels that cross': {
    parts: [
      perSize(null),
      shared(
        'a',
        groupsOf((g) => g % 12),
      ),
      shared(
        'b',
        groupsOf((g) => Math.floor(g / 20)),
      ),
    ],
  },
  'a negative correlation inside groups': { parts: [perSize(exchangeable(tens))], rho: -0.08 },
  'an exchangeable between inside a shared level': {
    parts: [
      perSize(null),
      between(exchangeable(groupsOf((g) => Math.floor(g / 6)))),
      shared(
        'b',
        groupsOf((g) => Math.floor(g / 60)),
      ),
    ],
  },
  'an exponent with a correlation': {
    parts: [
      shapedPart(
        {
          kind: 'size-power',
          scale: 'free',
          at: (delta) => problem.sizes.map((n) => pow(n, -delta)),
          slopeAt: (delta) => problem.sizes.map((n) => -log(n) * pow(n, -delta)),
        },
        exchangeable(tens),
      ),
      shared(
        'b',
        groupsOf((g) => g % 3),
      ),
    ],
  },
  'classes with a correlation across them': {
    parts: [
      classPart({
        names: ['phi: p', 'phi: q'],
        classOf: groupsOf((g) => g % 2),
        base: problem.sizes.map((n) => 10 / n),
        link: exchangeable(tens),
      }),
    ],
  },
  'one chain over all cells': {
    parts: [
      perSize({
        kind: 'serial',
        group: groupsOf(() => 0),
        order: fromDoubles(
          Float64Array.from({ length: cells }, (_, g) => ((g * 77) % cells) + Math.floor(((g * 77) % cells) / 9)),
        ),
      }),
    ],
  },
};

/** The same structure by its full blocks alone. */
function inBlocks(structure: Structure): Structure {
  const { links } = structure;
  if (!links) throw new Error('cells are tied');
  return { ...structure, links: { ...links, kinds: links.kinds.map(() => null), together: null, formAt: () => null } };
}

it.each(Object.entries(structures))(
  '%s: by thin terms as by the full block, height, score and information',
  (_, made) => {
    const structure = joinAll({ parts: made.parts, fixed: {} });
    expect(structure.links?.kinds.every((kind) => kind !== null)).toBe(true);
    const theta = interiorPoint(structure).map((value, i) =>
      structure.parameters[i]?.role === 'correlation' ? (made.rho ?? 0.35) : value * (1 + 0.1 * i),
    );
    const thin = omegaAt(structure, theta);
    const full = omegaAt(inBlocks(structure), theta);
    for (const [b, block] of (full.blocks ?? []).entries())
      for (const [at, value] of block.matrix.entries())
        expect(Math.abs((thin.blocks?.[b]?.matrix[at] as number) - value)).toBeLessThan(1e-13 * (1 + Math.abs(value)));
    const rows = likelihoodRows({ ...problem, structure });
    for (const restricted of [false, true]) {
      const one = likelihoodAt({ rows, structure, theta, restricted });
      const other = likelihoodAt({ rows, structure: inBlocks(structure), theta, restricted });
      if (!one || !other) throw new Error('both can be computed');
      expect(Math.abs(one.logLikelihood - other.logLikelihood)).toBeLessThan(1e-10 * Math.abs(other.logLikelihood));
      // A score is the difference of weighted squares and what they are expected to be: each is as large as their sum.
      for (const [a, row] of other.information.entries()) {
        const spread = Math.sqrt(row[a] as number);
        expect(Math.abs((one.score[a] as number) - (other.score[a] as number))).toBeLessThan(
          1e-12 * (spread + cells * other.scaleRatio),
        );
        for (const [b, value] of row.entries()) {
          const size = spread * Math.sqrt(other.information[b]?.[b] as number);
          expect(Math.abs((one.information[a]?.[b] as number) - value)).toBeLessThan(1e-10 * size);
        }
      }
    }
  },
);

it('a shock that outweighs the cells by twelve orders keeps the digits of score and information: against fractions worked out by hand', () => {
  // n cells of variance d with a shared w: Omega^-1 = (I - w/(d + n w) J)/d; on one group, with no terms,
  // tr M_phi = (n-1)/phi + 1/(phi (1 + n w/d)) ..., tr M_w = n/(d + n w), I_ww = (n/(d + n w))^2 / 2.
  const n = 12;
  const d = 2 ** -40;
  const structure = joinAll({
    parts: [
      levelPart({
        kind: 'constant',
        parameter: { name: 'phi', role: 'scale' },
        base: new Float64Array(n).fill(1),
        link: null,
      }),
      levelPart({
        kind: 'shared',
        parameter: { name: 'omega2: a', role: 'shared' },
        base: new Float64Array(n).fill(1),
        link: { kind: 'shared', group: new Int32Array(n) },
      }),
    ],
    fixed: {},
  });
  const theta = Float64Array.of(d, 1);
  const residuals = Float64Array.from({ length: n }, (_, g) => (g % 2 === 0 ? 1 : -1) * 2 ** -20);
  const at = likelihoodAt({ rows: heldRows(residuals), structure, theta, restricted: false });
  if (!at) throw new Error('it can be computed');
  const [unitPhi, unitW] = [at.units[0] as number, at.units[1] as number];
  const whole = d + n;
  // The residuals add up to 0: r'Omega^-1 r = sum r^2 / d, and they have no part in the shock's score.
  const close = (found: number, expected: number) => expect(Math.abs(found / expected - 1)).toBeLessThan(1e-9);
  close((at.score[1] as number) / unitW, -n / whole / 2);
  close((at.information[1]?.[1] as number) / unitW / unitW, (n / whole) ** 2 / 2);
  close((at.information[0]?.[1] as number) / unitPhi / unitW, n / whole / whole / 2);
  close((at.information[0]?.[0] as number) / unitPhi / unitPhi, ((n - 1) / d / d + 1 / whole / whole) / 2);
  expect(at.logLikelihood).toBeCloseTo(
    -(n * Math.log(2 * Math.PI) + (n - 1) * Math.log(d) + Math.log(whole) + (n * 2 ** -40) / d) / 2,
    9,
  );
});
