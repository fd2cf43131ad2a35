import { spanOf } from '../algebra/orthonormal';
import { chiSquareUpperQuantile, normalUpper } from '../numbers/distributions';
import { plainDot, plainSquares } from '../numbers/sums';
import { correlateBy, correlateInside } from './correlated-draws';
import { normalRows } from './draws';
import type { Frame } from './frame';
import { type Pairs, partnerSums } from './pairs';

interface Known {
  readonly frame: Frame;
  readonly pairs: Pairs;
}

/** Up to this freedom drawing every square costs less than one quantile. */
const FEW_SQUARES = 60;

/** Draws, and I of each. */
type Drawn = { readonly draws: readonly Float64Array[]; readonly statistic: (draw: Float64Array) => number };

/**
 * I from the group sums S of the residuals and their sum of squares, I = (G / sum B) (sum S^2 / r'r - 1): only what the group
 * indicators add to the model is drawn, and one chi-square for all the rest.
 *
 *     u = root(1 - rho) z + root(rho) w_group;  t = T'u, T what the indicators add to the basis;  S = (indicators' T) t
 */
export function overGroups({ frame, pairs }: Known): (rho: number) => Drawn {
  const { count, basis } = frame;
  const groups = pairs.groups ?? [];
  const indicators = groups.map((rows) => {
    const column = new Float64Array(count);
    for (const g of rows) column[g] = 1;
    return column;
  });
  const added = spanOf(indicators, basis);
  const links = indicators.map((column) => Float64Array.from(added, (t) => plainDot(t, column)));
  const size = added.length;
  const rest = count - basis.length - size;
  const from = size + groups.length;
  const draws = normalRows(from + (rest > FEW_SQUARES ? 1 : rest));
  const restOf = new Map(draws.map((draw) => [draw, chiSquareFrom(draw.subarray(from), rest)]));
  const scale = count / pairs.total;
  return (rho) => {
    const own = Math.sqrt(1 - rho);
    const shared = Math.sqrt(rho);
    const coordinates = new Float64Array(size);
    const statistic = (draw: Float64Array) => {
      for (let i = 0; i < size; i++) coordinates[i] = own * (draw[i] as number);
      for (const [j, link] of links.entries()) addTo(coordinates, link, shared * (draw[size + j] as number));
      const squares = links.reduce((sum, link) => sum + plainDot(link, coordinates) * plainDot(link, coordinates), 0);
      const total = plainSquares(coordinates) + (1 - rho) * (restOf.get(draw) as number);
      return scale * (squares / total - 1);
    };
    return { draws, statistic };
  };
}

/** A chi-square on a freedom: the sum of as many squares where those are drawn, else by the quantile of the one number drawn. */
function chiSquareFrom(drawn: Float64Array, freedom: number): number {
  if (freedom <= FEW_SQUARES) return plainSquares(drawn);
  return chiSquareUpperQuantile(normalUpper(drawn[0] as number), freedom);
}

/** I from residuals of correlated draws, cell by cell. */
export function overCells({ frame, pairs }: Known): (rho: number) => Drawn {
  const { groups } = pairs;
  const draws = groups ? normalRows(frame.count + groups.length) : frame.draws();
  const scale = frame.count / pairs.total;
  const residuals = new Float64Array(frame.count);
  return (rho) => {
    const correlate = groups ? correlateInside(groups, rho) : correlateBy(pairs.partners ?? [], rho);
    const statistic = (draw: Float64Array) => {
      frame.leftOver(correlate(draw), residuals);
      return (scale * plainDot(residuals, partnerSums(pairs, residuals))) / plainSquares(residuals);
    };
    return { draws, statistic };
  };
}

function addTo(target: Float64Array, column: Float64Array, times: number): void {
  for (let i = 0; i < target.length; i++) target[i] = (target[i] as number) + times * (column[i] as number);
}
