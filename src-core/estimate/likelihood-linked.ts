import { forwardInPlace } from '../algebra/cholesky';
import { log } from '../numbers/elementary';
import { type Height, heightOf, type Likelihood, type LikelihoodPlace } from './likelihood-place';
import { linkedInformation, linkedScore } from './linked-derivatives';
import { type LinkedPlace, linkedPlace, roomForRows, rowsOf } from './linked-place';
import { type WeighedRows, weighedRows } from './weighed-rows';

/** What a likelihood of correlated cells gives: its height, and more when asked for. */
export interface LinkedLikelihood extends Height {
  readonly units: () => Float64Array;
  readonly score: () => Float64Array;
  readonly information: () => Float64Array[];
}

/**
 * The full or the restricted log-likelihood of cells that go together, block by block; cells outside all blocks by their variance.
 *
 *     dl/dtheta_a   = 1/2 [ r~' M_a r~ - tr M_a + tr Q' M_a Q ]            (the last term under the restricted likelihood alone)
 *     I_ab          = 1/2 [ tr M_a M_b - 2 tr Q' M_a M_b Q + tr S_a S_b ]   (the first term alone under the full one)
 *
 * Omega = P P', M_a = P^-1 Omega_a P^-T, r~ = P^-1 r, Q an orthonormal basis of P^-1 X, S_a = Q' M_a Q. The rows are one to one with the cells. Null where
 * Omega is not positive definite, or too far from the middle for anything to be computed.
 *
 * Source: Harville 1977.
 */
export function linkedLikelihood(place: LikelihoodPlace): LinkedLikelihood | null {
  const { rows, structure, theta, restricted } = place;
  const { terms: k, middle } = rows;
  const at = linkedPlace({ structure, theta, middle });
  if (!at) return null;
  const whitened = whitenedRows(place, at);
  const solved = weighedRows({ ...rows, ...whitened }, new Float64Array(rows.cells).fill(1));
  if (!solved) return null;
  let logGram = rows.logDeterminant;
  for (let i = 0; i < k; i++) logGram += 2 * log(solved.factor[i * k + i] as number);
  const height = heightOf(place, { logOmega: at.logOmega, logGram, squares: solved.weightedRss });
  if (!height) return null;
  let basis: Float64Array | null = null;
  const derived = () => ({ at, terms: k, restricted, basis: (basis ??= orthonormal(whitened.basis, solved, k)) });
  return {
    ...height,
    units: at.units,
    score: () => linkedScore(derived(), solved.residuals),
    information: () => linkedInformation(derived()),
  };
}

/** P^-1 times the rows. */
function whitenedRows({ rows }: LikelihoodPlace, at: LinkedPlace): { basis: Float64Array; response: Float64Array } {
  const { terms: k, middle } = rows;
  const basis = new Float64Array(rows.basis.length);
  const response = new Float64Array(rows.response.length);
  for (let g = 0; g < response.length; g++) {
    if (!at.alone[g]) continue;
    const root = Math.sqrt((middle[g] as number) / (at.variances[g] as number));
    response[g] = root * (rows.response[g] as number);
    for (let i = g * k; i < (g + 1) * k; i++) basis[i] = root * (rows.basis[i] as number);
  }
  const room = roomForRows();
  for (const { cells, block } of at.placed) {
    const n = cells.length;
    const left = rowsOf(rows.response, cells, { width: 1, into: room(n, 0) });
    const own = rowsOf(rows.basis, cells, { width: k, into: room(n * k, 1) });
    block.whiten(left, 1);
    if (k > 0) block.whiten(own, k);
    for (let i = 0; i < n; i++) {
      const g = cells[i] as number;
      response[g] = left[i] as number;
      for (let j = 0; j < k; j++) basis[g * k + j] = own[i * k + j] as number;
    }
  }
  return { basis, response };
}

/** Every row of the whitened design times L^-T: orthonormal columns. */
function orthonormal(basis: Float64Array, { factor }: WeighedRows, k: number): Float64Array {
  const result = basis.slice();
  const row = new Float64Array(k);
  for (let at = 0; at < result.length; at += k) {
    for (let i = 0; i < k; i++) row[i] = result[at + i] as number;
    forwardInPlace(factor, row, k);
    for (let i = 0; i < k; i++) result[at + i] = row[i] as number;
  }
  return result;
}

/** The likelihood with its derivatives. */
export function linkedLikelihoodAt(place: LikelihoodPlace): Likelihood | null {
  const found = linkedLikelihood(place);
  if (!found) return null;
  const { logLikelihood, scaleRatio, rescaled } = found;
  return {
    logLikelihood,
    scaleRatio,
    rescaled,
    units: found.units(),
    score: found.score(),
    information: found.information(),
  };
}
