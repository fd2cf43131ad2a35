import { heightAt, likelihoodAt } from '@core/estimate/likelihood';
import { heldRows, likelihoodRows } from '@core/estimate/likelihood-rows';
import { freeParameters } from '@core/model/structure';
import fc from 'fast-check';
import { determinant, inverse, Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { type Drawn, draw, type Kind, structureFor } from './problems';

const kinds: readonly Kind[] = ['between-per-size', 'between-given', 'size-power', 'between-size-power'];

/** A problem, a structure and a point inside its parameters' range. */
const places = fc.record({
  problem: fc.integer({ min: 1, max: 1e6 }).map((seed) => draw(seed, 12, 3)),
  kind: fc.constantFrom(...kinds),
  restricted: fc.boolean(),
  point: fc.array(fc.double({ min: 0.2, max: 3, noNaN: true }), { minLength: 3, maxLength: 3 }),
});

function placeOf({
  problem,
  kind,
  restricted,
  point,
}: {
  problem: Drawn;
  kind: Kind;
  restricted: boolean;
  point: number[];
}) {
  const structure = structureFor(kind, problem);
  const theta = Float64Array.from(structure.parameters, (_, i) => point[i] as number);
  return { rows: likelihoodRows({ ...problem, structure }), structure, restricted, theta };
}

/** The log-likelihood and its information by dense G x G matrices, as the definitions read. */
function dense(problem: Drawn, place: ReturnType<typeof placeOf>): { height: number; information: number[][] } {
  const { structure, theta, restricted } = place;
  const variances = structure.variancesAt(theta);
  const cells = variances.length;
  const x = new Matrix(Array.from({ length: cells }, (_, g) => problem.design.columns.map((c) => c.high[g] as number)));
  const y = Matrix.columnVector([...problem.response.high]);
  const w = Matrix.diag([...variances].map((v) => 1 / v));
  const gram = x.transpose().mmul(w).mmul(x);
  const p = Matrix.sub(w, w.mmul(x).mmul(inverse(gram)).mmul(x.transpose()).mmul(w));
  const quadratic = y.transpose().mmul(p).mmul(y).get(0, 0);
  const logDeterminant = variances.reduce((sum, v) => sum + Math.log(v), 0);
  const freedom = cells - (restricted ? 3 : 0);
  const sum =
    freedom * Math.log(2 * Math.PI) + logDeterminant + quadratic + (restricted ? Math.log(determinant(gram)) : 0);
  const parts = structure.derivativesAt(theta).map((d) => (restricted ? p : w).mmul(Matrix.diag([...d])));
  return { height: -sum / 2, information: parts.map((a) => parts.map((b) => a.mmul(b).trace() / 2)) };
}

describe('a log-likelihood', () => {
  it('and its expected information are those of the dense definitions', () => {
    fc.assert(
      fc.property(places, (drawn) => {
        const place = placeOf(drawn);
        const at = likelihoodAt(place);
        const outside = dense(drawn.problem, place);
        expect(Math.abs((at?.logLikelihood as number) - outside.height)).toBeLessThan(
          1e-9 * (1 + Math.abs(outside.height)),
        );
        for (const [a, row] of outside.information.entries())
          for (const [b, value] of row.entries()) {
            const size = Math.sqrt((outside.information[a]?.[a] as number) * (outside.information[b]?.[b] as number));
            const units = (at?.units[a] as number) * (at?.units[b] as number);
            expect(Math.abs((at?.information[a]?.[b] as number) / units - value)).toBeLessThan(1e-9 * size);
          }
      }),
      { numRuns: 60 },
    );
  });

  it('has the score of its numerical derivative', () => {
    fc.assert(
      fc.property(places, (drawn) => {
        const place = placeOf(drawn);
        const at = likelihoodAt(place);
        for (const [a, i] of freeParameters(place.structure).entries()) {
          const step = 1e-5 * (place.theta[i] as number);
          const height = (by: number) =>
            heightAt({ ...place, theta: place.theta.with(i, (place.theta[i] as number) + by) })
              ?.logLikelihood as number;
          const difference = (height(step) - height(-step)) / (2 * step);
          const unit = at?.units[a] as number;
          const spread = Math.sqrt(at?.information[a]?.[a] as number) / unit;
          const score = (at?.score[a] as number) / unit;
          // What rounding of the two heights leaves of their difference.
          const rounding = (4 * Number.EPSILON * Math.abs(height(0))) / step;
          expect(Math.abs(score - difference)).toBeLessThan(1e-6 * (spread + Math.abs(difference)) + rounding);
        }
      }),
      { numRuns: 60 },
    );
  });

  it('without its derivatives is the same to the last bit, and is foretold after all variances grow', () => {
    fc.assert(
      fc.property(places, (drawn) => {
        const place = placeOf({ ...drawn, kind: 'between-per-size' });
        const height = heightAt(place);
        expect(height?.logLikelihood).toBe(likelihoodAt(place)?.logLikelihood);
        const ratio = height?.scaleRatio as number;
        const grown = heightAt({ ...place, theta: place.theta.map((value) => value * ratio) });
        expect(grown?.logLikelihood).toBeCloseTo(height?.rescaled as number, 9);
        expect(grown?.scaleRatio).toBeCloseTo(1, 11);
      }),
      { numRuns: 40 },
    );
  });

  it('is the same when cells of equal size are pooled', () => {
    const problem = draw(11, 400, 3);
    const sizes = problem.sizes.map((n) => 1 + (n % 5));
    const structure = structureFor('between-per-size', { ...problem, sizes });
    const rows = likelihoodRows({ ...problem, structure });
    expect(rows.response.length).toBe(20);
    const theta = Float64Array.of(3, 0.4);
    const apart = sizes.map((n, g) => n * (1 + g * 1e-14));
    const single = structureFor('between-per-size', { ...problem, sizes: apart });
    const unpooled = likelihoodRows({ ...problem, structure: single });
    expect(unpooled.response.length).toBe(400);
    for (const restricted of [true, false]) {
      const [one, other] = [
        likelihoodAt({ rows, structure, restricted, theta }),
        likelihoodAt({ rows: unpooled, structure: single, restricted, theta }),
      ];
      expect(one?.logLikelihood).toBeCloseTo(other?.logLikelihood as number, 8);
      for (const a of [0, 1]) {
        const spread = Math.sqrt(other?.information[a]?.[a] as number);
        const times = (i: number) => (other?.units[i] as number) / (one?.units[i] as number);
        const score = (one?.score[a] as number) * times(a);
        expect(Math.abs(score - (other?.score[a] as number))).toBeLessThan(1e-9 * spread);
        const information = (one?.information[a]?.[0] as number) * times(a) * times(0);
        expect(information / (other?.information[a]?.[0] as number)).toBeCloseTo(1, 10);
      }
    }
  });

  it('of held residuals is the pseudo-likelihood, and there is none at a variance of zero', () => {
    const problem = draw(3, 12, 2);
    const structure = structureFor('between-given', problem);
    const residuals = problem.response.high;
    const rows = heldRows(residuals);
    const variances = structure.variancesAt(Float64Array.of(0.5));
    const sum = residuals.reduce(
      (s, e, g) => s + Math.log(2 * Math.PI * (variances[g] as number)) + (e * e) / (variances[g] as number),
      0,
    );
    expect(heightAt({ rows, structure, restricted: false, theta: Float64Array.of(0.5) })?.logLikelihood).toBeCloseTo(
      -sum / 2,
      11,
    );
    expect(likelihoodAt({ rows, structure, restricted: false, theta: Float64Array.of(-1e9) })).toBeNull();
  });
});
