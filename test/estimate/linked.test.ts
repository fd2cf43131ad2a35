import { fitAt } from '@core/estimate/fit-at';
import { informationPieces } from '@core/estimate/information-pieces';
import { heightAt, likelihoodAt, scoreAt } from '@core/estimate/likelihood';
import { likelihoodRows } from '@core/estimate/likelihood-rows';
import { interiorPoint, omegaAt, type Structure } from '@core/model/structure';
import { seeded } from '@core/numbers/random';
import { describe, expect, it } from 'vitest';
import { eliminated, inFull, minus, type Square, times, trace, turned } from './dense-omega';
import { drawLinked, type LinkedKind, type LinkedProblem, linkedKinds, linkedStructure } from './linked-problems';

const LOG_TWO_PI = Math.log(2 * Math.PI);

/** A point inside the range, away from where the program would start. */
function somewhere(structure: Structure, seed: number): Float64Array {
  const random = seeded(seed);
  return interiorPoint(structure).map((value, i) => {
    const role = structure.parameters[i]?.role;
    const u = random.uniform();
    if (role === 'exponent') return 0.4 + u;
    if (role === 'correlation') return 0.1 + 0.6 * u;
    return value * Math.exp(2 * u - 1);
  });
}

function designOf({ design }: LinkedProblem): Square {
  return Array.from(design.columns[0]?.high ?? [], (_, g) => design.columns.map(({ high }) => high[g] as number));
}

/** Both likelihoods by elimination on the whole of Omega. */
function bruteForce(problem: LinkedProblem, structure: Structure, theta: Float64Array) {
  const X = designOf(problem);
  const y = Array.from(problem.response.high, (value) => [value]);
  const { inverse, logDeterminant } = eliminated(inFull(omegaAt(structure, theta)));
  const gram = times(times(turned(X), inverse), X);
  const { inverse: phi, logDeterminant: logGram } = eliminated(gram);
  const P = minus(inverse, times(times(times(inverse, X), phi), times(turned(X), inverse)));
  const squares = (times(times(turned(y), P), y)[0] as number[])[0] as number;
  const [cells, k] = [X.length, X[0]?.length as number];
  return {
    full: -(cells * LOG_TWO_PI + logDeterminant + squares) / 2,
    restricted: -((cells - k) * LOG_TWO_PI + logDeterminant + logGram + squares) / 2,
    P,
    inverse,
    phi,
    X,
  };
}

/** dOmega/dtheta_i in full, by the structure's own derivatives. */
function slopeInFull(structure: Structure, theta: Float64Array, i: number): Square {
  const { links } = structure;
  return inFull({
    diagonal: structure.derivativesAt(theta)[i] as Float64Array,
    blocks: (links?.blocks ?? []).flatMap((cells, b) => {
      const matrix = links?.blockDerivativesAt(theta, b)[i];
      return [{ cells, matrix: matrix ?? new Float64Array(cells.length * cells.length) }];
    }),
  });
}

const seeds = [1, 2, 3];

describe.each(linkedKinds)('the likelihoods of cells tied by %s', (kind: LinkedKind) => {
  it('are those of the whole Omega, by elimination', () => {
    for (const seed of seeds) {
      const problem = drawLinked(seed, 24, 1 + seed);
      const structure = linkedStructure(kind, problem);
      const theta = somewhere(structure, seed);
      const brute = bruteForce(problem, structure, theta);
      const rows = likelihoodRows({ ...problem, structure });
      for (const restricted of [false, true]) {
        const found = heightAt({ rows, structure, theta, restricted })?.logLikelihood as number;
        const expected = restricted ? brute.restricted : brute.full;
        expect(Math.abs(found - expected)).toBeLessThan(1e-10 * (Math.abs(expected) + 24));
      }
    }
  });

  it('have the score that their differences show', () => {
    for (const seed of seeds) {
      const problem = drawLinked(seed, 30, 3);
      const structure = linkedStructure(kind, problem);
      const theta = somewhere(structure, seed + 10);
      const rows = likelihoodRows({ ...problem, structure });
      for (const restricted of [false, true]) {
        const at = scoreAt({ rows, structure, theta, restricted });
        for (const [i, value] of theta.entries()) {
          const step = 1e-5 * Math.max(Math.abs(value), 1e-3);
          const height = (h: number) =>
            heightAt({ rows, structure, restricted, theta: theta.with(i, value + h) })?.logLikelihood as number;
          const slope = (8 * (height(step) - height(-step)) - (height(2 * step) - height(-2 * step))) / (12 * step);
          const found = (at?.score[i] as number) / (at?.units[i] as number);
          expect(Math.abs(found - slope)).toBeLessThan(2e-6 * (Math.abs(slope) + 1 / Math.abs(value)));
        }
      }
    }
  });

  it('have the expected information of the textbook, tr(P Omega_i P Omega_j) / 2', () => {
    for (const seed of seeds) {
      const problem = drawLinked(seed, 20, 3);
      const structure = linkedStructure(kind, problem);
      const theta = somewhere(structure, seed + 20);
      const { P, inverse } = bruteForce(problem, structure, theta);
      const rows = likelihoodRows({ ...problem, structure });
      for (const restricted of [false, true]) {
        const at = likelihoodAt({ rows, structure, theta, restricted });
        const through = Array.from(theta, (_, i) => times(restricted ? P : inverse, slopeInFull(structure, theta, i)));
        for (const [i, row] of (at?.information ?? []).entries())
          for (const [j, value] of row.entries()) {
            const own = value / (at?.units[i] as number) / (at?.units[j] as number);
            const expected = trace(times(through[i] as Square, through[j] as Square)) / 2;
            const size = Math.sqrt(
              trace(times(through[i] as Square, through[i] as Square)) *
                trace(times(through[j] as Square, through[j] as Square)),
            );
            expect(Math.abs(own - expected)).toBeLessThan(1e-10 * size);
          }
      }
    }
  });

  it('have the pieces of Kenward and Roger in the coordinates of the fit', () => {
    const problem = drawLinked(5, 20, 3);
    const structure = linkedStructure(kind, problem);
    const theta = somewhere(structure, 31);
    const { response, design } = problem;
    const fitted = fitAt({
      response,
      design,
      structure,
      theta,
      estimate: { method: 'restricted' },
      weighting: null,
      startsTried: 0,
    });
    const pieces = informationPieces(fitted);
    const { inverse, X } = bruteForce(problem, structure, theta);
    // R = (R^-1)^-1, so that R' S R is X' Omega^-1 Omega_i Omega^-1 X.
    const R = eliminated(turned(fitted.inverse.map((column) => Array.from(column)))).inverse;
    const inRows = (square: Float64Array | undefined): Square =>
      Array.from({ length: 3 }, (_, i) => Array.from(square?.subarray(i * 3, i * 3 + 3) ?? []));
    const W = times(inverse, X);
    const agree = (found: Square, expected: Square) => {
      const size = Math.max(...expected.flat().map(Math.abs));
      for (const [i, row] of found.entries())
        for (const [j, value] of row.entries())
          expect(Math.abs(value - (expected[i]?.[j] as number))).toBeLessThan(1e-9 * size + 1e-300);
    };
    for (const [a, i] of (pieces?.free ?? []).entries()) {
      const unit = pieces?.units[a] as number;
      const scaled = (fitted.scale === null ? 1 : fitted.scale) as number;
      const own = slopeInFull(structure, theta, i).map((row) => row.map((x) => x * unit));
      const S = inRows(pieces?.slopes[a]);
      // The fit's R leaves a free scale out; Omega has it.
      agree(
        times(times(turned(R), S), R).map((row) => row.map((x) => x / scaled)),
        times(times(turned(W), own), W),
      );
      for (const [b, j] of (pieces?.free ?? []).entries()) {
        const other = slopeInFull(structure, theta, j).map((row) => row.map((x) => x * (pieces?.units[b] as number)));
        agree(
          times(times(turned(R), inRows(pieces?.products[a]?.[b])), R).map((row) => row.map((x) => x / scaled)),
          times(times(turned(W), own), times(inverse, times(other, W))),
        );
      }
    }
  });
});
