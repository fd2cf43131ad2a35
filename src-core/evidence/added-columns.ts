import { spanOf } from '../algebra/orthonormal';
import { fUpper } from '../numbers/distributions';
import { plainDot, plainSquares } from '../numbers/sums';
import { type Frame, kindsOf } from './frame';
import { evidenceOf, notApplicable } from './reading';

/**
 * DuMouchel & Duncan 1983: do the fit by the structure's weights and one by other weights agree? A difference is an alarm about the
 * terms of the model, not advice to weight.
 *
 *     constant structure   sizes times X added to unweighted least squares
 *     any other            v times X added to the fit weighted by 1 / v
 *     F on (columns added, G - k - added), under a fixed scale too; dependent columns dropped
 *
 * Not applicable: a constant structure without sizes; every added column dependent (equal v); no freedom left.
 * detail: added ("size" or "variance": what multiplies X), columns (their number).
 */
export function dumouchelDuncan(frame: Frame) {
  const test = 'dumouchel-duncan';
  const kinds = kindsOf(frame.plan);
  const constant = kinds.length === 1 && kinds[0] === 'constant';
  const factors = constant ? frame.sizes : frame.fitted.shape;
  if (!factors) return notApplicable(test, 'no-size', { added: 'size' });
  const detail = { added: constant ? 'size' : 'variance' };
  // The whitened columns' own basis spans the same space as the columns, and its products with v the same as theirs.
  const columns = frame.basis.map((q) => q.map((x, g) => x * (factors[g] as number)));
  const added = spanOf(columns, frame.basis);
  if (added.length === 0) return notApplicable(test, 'nothing-added', detail);
  const freedom1 = added.length;
  const freedom2 = frame.freedom - freedom1;
  if (freedom2 < 1) return notApplicable(test, 'too-few-cells', { ...detail, columns: freedom1 });

  const left = frame.residuals.slice();
  let explained = 0;
  for (const q of added) {
    const along = plainDot(q, left);
    explained += along * along;
    for (let g = 0; g < left.length; g++) left[g] = (left[g] as number) - along * (q[g] as number);
  }
  const rest = plainSquares(left) / freedom2;
  if (!(rest > 0)) return notApplicable(test, 'no-variation', { ...detail, columns: freedom1 });
  const statistic = explained / freedom1 / rest;
  const p = fUpper(statistic, freedom1, freedom2);
  return evidenceOf(test, { statistic, freedom1, freedom2, p, detail: { ...detail, columns: freedom1 } });
}
