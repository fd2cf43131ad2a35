import { clustersThatCut } from '../model/check';
import { correlatingPart, curvedParameter } from '../protocol/check-method';
import type { Estimate, Inference, Variance } from '../protocol/plan';
import type { Cells } from '../table/cells';

/**
 * The plan's inference where it applies to a rival, else the model's own at the plan's level.
 *
 * knapp-hartung: given errors, or a matrix, with a between part; kenward-roger: restricted likelihood, or nothing unknown but a scale, and Omega linear; robust: no
 * part that correlates cells; clustered and wild: clusters that hold every block of cells that go together.
 */
export function inferenceFor(
  rival: { readonly variance: Variance; readonly estimate: Estimate },
  own: Inference,
  cells: Cells,
): Inference {
  return applies(rival, own, cells) ? own : { kind: 'model', level: own.level };
}

function applies(
  { variance, estimate }: { readonly variance: Variance; readonly estimate: Estimate },
  own: Inference,
  cells: Cells,
): boolean {
  const { parts } = variance;
  const { method } = estimate;
  switch (own.kind) {
    case 'model':
      return true;
    case 'knapp-hartung':
      return (
        parts.some(({ kind }) => kind === 'between') && parts.some(({ kind }) => kind === 'given' || kind === 'matrix')
      );
    case 'kenward-roger':
      return (method === 'restricted' || method === 'least-squares') && curvedParameter(variance) === undefined;
    case 'robust':
      return correlatingPart(variance) === undefined;
    case 'clustered':
    case 'wild':
      return clustersThatCut({ variance, inference: own, target: 'structure' }, cells).length === 0;
  }
}
