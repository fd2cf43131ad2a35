import type { Coefficient, Reference, Result } from '../protocol/result';
import { decimalsBy, levelText, number, p, pIs, rangeText, undefinedText } from './numbers';
import { coefficientUnit, inOutcomeUnit } from './units';

/** Below this many degrees of freedom a p value is not to be relied on, and stays off screen and paper. */
export const FEWEST_FREEDOM = 4;

export const withheldText = 'withheld';

/** Whether a p value stands in the result but is not shown. */
export function isWithheld(reference: Reference | null): boolean {
  return isFewFreedom(reference?.freedom ?? null);
}

/** Whether a freedom, the second one of an F test included, is too small to rely on a p value. */
export function isFewFreedom(freedom: number | null): boolean {
  return freedom !== null && freedom < FEWEST_FREEDOM;
}

/** "t on 52", "t on 17.3", "normal"; a dash where there is nothing to compare with. */
export function referenceText(reference: Reference | null): string {
  if (reference === null) return undefinedText;
  if (reference.kind === 'normal' || reference.freedom === null) return 'normal';
  return `t on ${freedomText(reference.freedom)}`;
}

/** Degrees of freedom: whole ones as they are, others to one decimal. */
export function freedomText(freedom: number | null): string {
  if (freedom === null) return undefinedText;
  return number(freedom, { decimals: Number.isInteger(freedom) ? 0 : 1 });
}

/** A p value as it is shown: withheld below 4 degrees of freedom. */
export function pText({ p: value, reference }: { p: number | null; reference: Reference | null }): string {
  return value !== null && isWithheld(reference) ? withheldText : p(value);
}

/**
 * One line a coefficient: name, estimate in its unit, interval, then error, reference with its freedom, ratio, p.
 *
 *     income: 0.83 kg per plot, per one thousand of income (95 % interval 0.40 to 1.18); error 0.20, t on 56, ratio 4.2, p < 0.001
 */
export function coefficientLines(result: Result): string[] {
  return result.fit.coefficients.map((one) => {
    const decimals = decimalsBy(one.se, one.estimate);
    const range =
      one.low === null && one.high === null
        ? 'no interval'
        : `${levelText(result.fit.inference.level)} interval ${rangeText(one.low, one.high, decimals)}`;
    const estimate = `${number(one.estimate, { decimals })} ${coefficientUnit(result, one.term)}`;
    return `${one.term}: ${estimate} (${range}); ${errorPhrase(one, decimals)}`;
  });
}

function errorPhrase(one: Coefficient, decimals: number): string {
  if (one.se === null) return 'its error is undefined';
  const parts = [`error ${number(one.se, { decimals })}`];
  if (one.reference !== null) parts.push(referenceText(one.reference));
  if (one.ratio !== null) parts.push(`ratio ${number(one.ratio, { digits: 3 })}`);
  if (one.p !== null) parts.push(isWithheld(one.reference) ? 'p withheld' : pIs(one.p));
  return parts.join(', ');
}

/** "−1.02 kg per plot (95 % interval −1.34 to −0.71)": an estimate in its unit inside a sentence. */
export function estimateInUnit(
  result: Result,
  of: {
    readonly estimate: number;
    readonly low: number | null;
    readonly high: number | null;
    readonly se?: number | null;
  },
): string {
  const decimals = decimalsBy(of.se ?? halfWidth(of), of.estimate);
  const shown = inOutcomeUnit(number(of.estimate, { decimals }), result.plan);
  if (of.low === null && of.high === null) return shown;
  return `${shown} (${levelText(result.fit.inference.level)} interval ${rangeText(of.low, of.high, decimals)})`;
}

/** A stand-in for the error where only an interval is known. */
function halfWidth({ low, high }: { readonly low: number | null; readonly high: number | null }): number | null {
  return low === null || high === null ? null : (high - low) / 4;
}
