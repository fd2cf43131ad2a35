import type { Fitted } from '../estimate/fitted';
import type { Plan } from '../protocol/plan';
import type { Coefficient, ExponentSupport, ScanPoint } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { type ExponentFit, exponentFit, sizeLogsOf } from './exponent-fit';
import { type Course, supportOf } from './exponent-support';
import { judgeOf } from './judge';

const POINTS = 31;

export interface ExponentScan {
  readonly scan: ScanPoint[];
  readonly support: ExponentSupport | null;
  /** The coefficients at the ends of the support. */
  readonly ends: readonly { readonly delta: number; readonly coefficients: readonly Coefficient[] }[];
}

/**
 * Every coefficient as the size exponent runs from 0 to 1.5, and the exponents that the data support.
 *
 *     v_g = phi m_g^-delta;  supported: 2 (l(best) - l(delta)) <= the chi-square quantile on 1 at the plan's level
 *
 * l is the method's own likelihood, the full one for least squares, with the scale profiled out; its ends are solved for, not read off the grid.
 * A term's range runs over the whole support, and so does the statement that its interval excludes zero. Intervals are the plan's robust ones
 * where it asks for those, else model-based with t on G - k.
 * Nothing where no size stands, where all sizes are equal, under maximum likelihood with a link, and where no residual is left to judge by; nor of a cancelled run (`hooks`).
 *
 * Source: Carroll & Ruppert 1988; METHODS of the program, 6.
 */
export function exponentScanOf(of: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly hooks?: Hooks;
}): ExponentScan {
  const { fitted, cells, plan, hooks } = of;
  const sizes = cells.effectiveSize;
  const nothing: ExponentScan = { scan: [], support: null, ends: [] };
  // The working response of a link has its variance from the means, whatever the sizes.
  if (!sizes || sizes.every((m) => m === sizes[0]) || fitted.fixedPoint?.link) return nothing;
  const course = courseOf({ fitted, sizes, cells, plan, hooks });
  if (!course.at(0)) return nothing;
  const scan: ScanPoint[] = [];
  for (let i = 0; i < POINTS; i++) {
    const point = course.at(i / 20);
    if (!point) return nothing;
    hooks?.progress('sensitivity', i / POINTS);
    const { delta, logLikelihood, restrictedLogLikelihood } = point;
    scan.push({ delta, coefficients: [...course.coefficients(delta)], logLikelihood, restrictedLogLikelihood });
  }
  const support = supportOf({ course, scan, level: plan.inference.level });
  const ends = [support.low, support.high].map((delta) => ({ delta, coefficients: course.coefficients(delta) }));
  return { scan, support, ends };
}

function courseOf(of: {
  readonly fitted: Fitted;
  readonly sizes: Float64Array;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly hooks: Hooks | undefined;
}): Course {
  const known = new Map<number, ExponentFit | null>();
  const told = new Map<number, readonly Coefficient[]>();
  const sizes = sizeLogsOf(of.sizes);
  const restricted = of.fitted.estimate.method === 'restricted';
  const judge = judgeOf(of.cells, scanPlan(of.plan));
  const at = (delta: number): ExponentFit | null => {
    if (of.hooks?.cancelled()) return null;
    const found = known.has(delta) ? known.get(delta) : exponentFit({ fitted: of.fitted, sizes, delta });
    known.set(delta, found ?? null);
    return found ?? null;
  };
  return {
    at,
    coefficients: (delta) => {
      const point = at(delta);
      const found = told.get(delta) ?? (point && judge(point.fitted(), null)) ?? [];
      told.set(delta, found);
      return found;
    },
    likelihood: (delta) => {
      const point = at(delta);
      if (!point) return Number.NaN;
      return restricted ? point.restrictedLogLikelihood : point.logLikelihood;
    },
    slope: (delta) => {
      const point = at(delta);
      if (!point) return Number.NaN;
      return restricted ? point.restrictedSlope : point.slope;
    },
  };
}

/** The plan under which a point of the scan is judged: its own structure, no target but it. */
function scanPlan(plan: Plan): Plan {
  const { inference } = plan;
  const kept = inference.kind === 'robust' || inference.kind === 'clustered' || inference.kind === 'wild';
  return {
    ...plan,
    variance: { parts: [{ kind: 'size-power', exponent: 1, correlation: null }], fixed: {} },
    target: 'structure',
    inference: kept ? inference : { kind: 'model', level: inference.level },
  };
}
