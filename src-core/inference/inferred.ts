import type { Fitted } from '../estimate/fitted';
import { done, type Outcome, refuse, refuseAll } from '../protocol/outcome';
import type { Inference, Plan } from '../protocol/plan';
import type { Coefficient, FitResult, Reference } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { checkClusters } from './check-clusters';
import type { Claim, Joint } from './claim';
import { clusteredClaim, spreadingOf } from './clustered';
import { clustersBy } from './clusters';
import { coefficientsOf } from './coefficients';
import { coordinatesOf, unitRow } from './coordinates';
import { undefinedJoint } from './joint';
import { kenwardRogerClaim } from './kenward-roger';
import { knappHartungClaim, modelClaim, robustClaim } from './model-claims';
import { checkLeverage } from './robust';
import { errorFreedomOf } from './satterthwaite';
import { wildClaim } from './wild-claim';

/** What is claimed about the coefficients of a fit, under the inference that the plan asks for. */
export interface Inferred {
  readonly coefficients: Coefficient[];
  /** k x k, the one behind the standard errors; null entries where it is undefined. */
  readonly covariance: (number | null)[][];
  /** In coefficient order. */
  readonly references: readonly (Reference | null)[];
  /** Standard error of a combination of coefficients, from its k multipliers, without the cancellation of x'Vx. */
  readonly errorOf: Claim['errorOf'];
  /** Reference of a combination of coefficients, from its k multipliers. */
  readonly referenceOf: Claim['referenceOf'];
  /** Whether the coefficients at these places are all 0; each counts once. */
  readonly jointOf: (columns: readonly number[]) => Joint;
  /** The p value of a combination against a value where none of a distribution's is meant; null otherwise. */
  readonly drawnP: ((multipliers: ArrayLike<number>, against: number) => number | null) | null;
  readonly knappHartungQ: number | null;
  readonly errorFreedom: FitResult['errorFreedom'];
  readonly wild: FitResult['wild'];
}

/**
 * Errors, intervals and p values of the coefficients.
 *
 *     model           C Omega C'                     normal where every variance is known, t with G - k otherwise
 *     knapp-hartung   q C Omega C'                   t with G - k
 *     kenward-roger   adjusted for the parameters    t with a freedom of its own
 *     robust          HC0 to HC4, whitened           t with G - k
 *     clustered       CR0 to CR3, one or two ways    t with B - 1, Satterthwaite's freedom under CR2
 *     wild            CR0                            p by bootstrap, no interval
 *
 * Errors that carry a freedom are never referred to the normal: given ones by Satterthwaite's, coefficient by coefficient, a matrix by its own.
 * With as many cells as coefficients what rests on residuals is null.
 * Refuses a cell of leverage 1 under HC2 to HC4 (`leverage-one`), fewer than two clusters (`too-few-clusters`), a cluster that alone decides a
 * coefficient under CR3 (`cluster-decides`), and a bootstrap that was stopped (`cancelled`).
 *
 * draws: false leaves the bootstrap out, its p values null, where a fit is only looked at for its errors.
 *
 * Example: `inferenceOf({ fitted, cells, plan })` with the plan of `fitted`; for a rival, a plan that holds the rival's variance.
 */
export function inferenceOf(known: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly draws?: boolean;
  readonly hooks?: Hooks;
}): Outcome<Inferred> {
  const { fitted, cells, plan } = known;
  const { leverages, residualFreedom, design } = fitted;
  const pinned = checkLeverage({ plan, leverages, residualFreedom, labels: cells.labels });
  if (pinned.length > 0) return refuseAll(pinned);
  const few = checkClusters({ plan, cells, coordinates: () => coordinatesOf(fitted), residualFreedom });
  if (few.length > 0) return refuseAll(few);

  const { claim, factor } = claimOf(known);
  if (known.hooks?.cancelled()) return refuse('cancelled', {});
  const k = design.names.length;
  const references = design.names.map((_, j) => claim.referenceOf(unitRow(k, j)));
  const coefficients = coefficientsOf({
    names: design.names,
    estimates: fitted.coefficients,
    errors: claim.errors,
    references,
    level: plan.inference.level,
  });
  const drawn = claim.drawn;
  return done({
    coefficients: drawn
      ? coefficients.map((one) => ({ ...one, p: drawn.wild.find(({ term }) => term === one.term)?.p ?? null }))
      : coefficients,
    covariance: claim.covariance,
    references,
    errorOf: claim.errorOf,
    referenceOf: claim.referenceOf,
    jointOf: (columns) => claim.jointOf([...new Set(columns)]),
    drawnP: drawn?.pOf ?? null,
    knappHartungQ: factor,
    errorFreedom: errorFreedomOf(plan, cells),
    wild: drawn && [...drawn.wild],
  });
}

interface Claimed {
  readonly claim: Claim;
  readonly factor: number | null;
}

function claimOf(known: Parameters<typeof inferenceOf>[0]): Claimed {
  const { fitted, cells, plan, hooks, draws = true } = known;
  const { inference } = plan;
  const plain = (claim: Claim): Claimed => ({ claim, factor: null });
  switch (inference.kind) {
    case 'model':
      return plain(modelClaim(fitted, plan, cells));
    case 'knapp-hartung':
      return knappHartungClaim(fitted, inference.floor);
    case 'robust':
      return plain(robustClaim(fitted, inference.correction));
    case 'kenward-roger':
      return plain(kenwardRogerClaim(fitted));
    case 'clustered':
      return plain(clusteredOf(fitted, cells, inference));
    case 'wild':
      return plain(
        fitted.residualFreedom > 0 ? wildClaim({ fitted, cells, inference, draws, hooks }) : nothing(fitted),
      );
  }
}

function clusteredOf(fitted: Fitted, cells: Cells, inference: Extract<Inference, { kind: 'clustered' }>): Claim {
  const { correction, by, alsoBy } = inference;
  const groupings = [by, ...(alsoBy ? [alsoBy] : [])].map((columns) => clustersBy(columns, cells));
  const coordinates = coordinatesOf(fitted);
  const spreading = fitted.residualFreedom > 0 ? spreadingOf({ coordinates, groupings, correction }) : null;
  return spreading ? clusteredClaim({ coordinates, spreading, estimates: fitted.coefficients }) : nothing(fitted);
}

/** No residual is free: nothing that rests on residuals is defined. */
function nothing({ design }: Fitted): Claim {
  return {
    covariance: design.names.map(() => design.names.map(() => null)),
    errors: design.names.map(() => null),
    errorOf: () => null,
    referenceOf: () => null,
    jointOf: (columns) => undefinedJoint(columns.length),
    drawn: null,
  };
}
