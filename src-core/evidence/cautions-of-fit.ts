import { LEVERAGE_OF_ONE } from '../numbers/tolerances';
import type { RejectingTest } from '../protocol/cautions';
import type { Evidence } from '../protocol/result';
import { type CautionSources, type Found, largestShift } from './caution-sources';

const SIGNIFICANT = 0.05;
/** Below this many certified digits the report says so. */
const FEW_DIGITS = 6;
/** A p value on fewer degrees of freedom is not to be relied on. */
const FEWEST_FREEDOM = 4;
const ROBUST_BAND = [0.67, 1.5] as const;

/** What the fit, its inference and its own checks give cause to say. */
export function cautionsOfFit({ fitted, pieces }: CautionSources): Found[] {
  const { fit, cells, selfChecks, robustBeside } = pieces;
  const found: Found[] = selfChecks
    .filter(({ passed, check }) => !passed && check !== 'digits')
    .map(({ check, figure }) => ({ code: 'self-check-failed', facts: { check, figure } }));
  if (fit.digits < FEW_DIGITS)
    found.push({ code: 'few-digits', facts: { digits: fit.digits, condition: fit.condition } });

  if (fit.residualFreedom <= 0)
    found.push({
      code: 'no-residual-freedom',
      facts: { cells: cells.length, coefficients: fit.coefficients.length },
    });
  else if (fit.residualFreedom === 1 && fitted.scale !== null)
    found.push({ code: 'leave-one-out-undefined', facts: { residualFreedom: 1 } });

  const labels = cells.filter(({ leverage }) => 1 - leverage < LEVERAGE_OF_ONE).map(({ label }) => label);
  if (labels.length > 0 && fit.residualFreedom > 0) found.push({ code: 'leverage-one', facts: { labels } });

  const terms = fit.coefficients.flatMap(({ term, reference }) =>
    reference?.freedom != null && reference.freedom < FEWEST_FREEDOM ? [{ term, freedom: reference.freedom }] : [],
  );
  if (terms.length > 0) found.push({ code: 'freedom-below-four', facts: { terms } });

  const apart = (robustBeside ?? []).flatMap(({ term, ratioToModel: ratio }) =>
    ratio !== null && (ratio < ROBUST_BAND[0] || ratio > ROBUST_BAND[1]) ? [{ term, ratio }] : [],
  );
  if (apart.length > 0) found.push({ code: 'robust-differs', facts: { terms: apart } });
  return [...found, ...cautionsOfChanges(pieces), ...cautionsOfTests(pieces, fitted.correlated)];
}

function cautionsOfChanges({ overturn, fit }: CautionSources['pieces']): Found[] {
  const crossing = overturn.filter(({ crosses }) => crosses !== null);
  const first = crossing[0];
  if (!first?.crosses) return [];
  const { term, change, estimate, low, high, crosses } = first;
  const shift = largestShift(fit, [{ term, to: estimate }]);
  const facts = {
    term,
    ...change,
    estimate,
    low,
    high,
    crosses,
    crossing: crossing.length,
    tried: overturn.length,
    shift,
  };
  return [{ code: 'overturned', facts }];
}

function cautionsOfTests({ evidence, fit, beside, cells }: CautionSources['pieces'], correlated: boolean): Found[] {
  const found: Found[] = [];
  const shift = largestShift(
    fit,
    beside.flatMap(({ coefficients }) => coefficients.map(({ term, estimate }) => ({ term, to: estimate }))),
  );
  const contradicted = scaleContradicted(fit);
  if (contradicted) found.push(contradicted);

  const rejecting = evidence.filter((one) => one.reading === 'rejects' && contradicts(one, fit, contradicted !== null));
  if (rejecting.length > 0) found.push({ code: 'structure-rejected', facts: { tests: rejecting.map(testOf), shift } });

  const dependence = evidence.filter(({ test, reading }) => test === 'dependence' && reading !== 'not-applicable');
  const together = dependence.filter((one) => one.reading === 'rejects' && !isClustered(one, fit.inference));
  if (together.length > 0) found.push({ code: 'dependence-found', facts: { tests: together.map(testOf) } });
  if (dependence.length === 0 && !correlated)
    found.push({ code: 'dependence-not-tested', facts: { cells: cells.length } });

  for (const { test, statistic, freedom1, freedom2, p } of evidence) {
    if (p === null || p >= SIGNIFICANT) continue;
    if (test === 'dumouchel-duncan')
      found.push({
        code: 'weighting-changes-answer',
        facts: { statistic, freedom1, freedom2, p, shift: largestShift(fit, unweighted(beside)) },
      });
    if (test === 'shapiro-wilk') found.push({ code: 'residuals-not-normal', facts: { statistic, p } });
  }
  return found;
}

/** Whether the errors of the coefficients allow for what a dependence test pairs by already. */
function isClustered({ detail }: Evidence, inference: CautionSources['pieces']['fit']['inference']): boolean {
  if (inference.kind !== 'clustered' && inference.kind !== 'wild') return false;
  const ways = [inference.by, ...(inference.kind === 'clustered' && inference.alsoBy ? [inference.alsoBy] : [])];
  const by = detail['by'];
  // Cells that share all columns of a cluster's key are in one cluster.
  return Array.isArray(by) && by.length > 0 && ways.some((way) => way.every((column) => by.includes(column)));
}

/** A fixed scale that the chi-square does not bear out. */
function scaleContradicted({ chiSquare, variance }: CautionSources['pieces']['fit']): Found | null {
  if (!chiSquare || chiSquare.p === null || chiSquare.p >= SIGNIFICANT) return null;
  // With a between part estimated the chi-square judges that estimate, not the given errors.
  if (variance.some(({ fixed }) => !fixed)) return null;
  const { statistic, freedom, p } = chiSquare;
  return { code: 'scale-contradicted', facts: { statistic, freedom, p, phi: statistic / freedom } };
}

const ofTheirOwn = ['dependence', 'dumouchel-duncan', 'shapiro-wilk'];

/** Whether a test that rejects speaks against the structure used, and not against a simpler one. */
function contradicts(one: Evidence, fit: CautionSources['pieces']['fit'], scaleTold: boolean): boolean {
  if (ofTheirOwn.includes(one.test)) return false;
  const has = (name: string): boolean => fit.variance.some((parameter) => parameter.name === name);
  if (one.test === 'heterogeneity') return !has('tau2') && !scaleTold;
  if (one.test !== 'boundary-likelihood-ratio') return true;
  const zero = one.detail['zero'];
  return Array.isArray(zero) && zero.some((name) => typeof name === 'string' && !has(name));
}

function testOf({ test, statistic, freedom1, freedom2, p, detail }: Evidence): RejectingTest {
  const by = detail['by'];
  const columns = Array.isArray(by) ? by.filter((one) => typeof one === 'string') : null;
  return { test, statistic, freedom1, freedom2, p, by: columns };
}

/** Coefficients of the rival whose cells all have one variance. */
function unweighted(beside: CautionSources['pieces']['beside']): { term: string; to: number }[] {
  const equal = beside.find(({ variances }) => variances.every((v) => v === variances[0]));
  return (equal?.coefficients ?? []).map(({ term, estimate }) => ({ term, to: estimate }));
}
