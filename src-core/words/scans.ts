import type { Coefficient, ExponentSupport } from '../protocol/result';
import { decimalsBy, list, number } from './numbers';

/**
 * Which size exponents the data support, and what becomes of the coefficients over them.
 *
 *     If error variance falls as size to the power d, the data support d from 0.2 to 0.9. Over that range income runs from 0.71 to 0.90 ...
 */
export function scanSentence(
  support: ExponentSupport,
  coefficients: readonly Coefficient[],
  terms: readonly string[],
): string {
  const { best, low, high, edge } = support;
  const d = (value: number): string => number(value, { decimals: 2 });
  const cut =
    edge === null
      ? ''
      : edge === 'both'
        ? ', the whole range looked at'
        : edge === 'low'
          ? ', cut at 0'
          : ', cut at 1.5';
  const start = `If error variance falls as size to the power d, the data support d from ${d(low)} to ${d(high)} (best ${d(best)})${cut}.`;
  const courses = terms.flatMap((term) => courseOf(support, coefficients, term));
  if (courses.length === 0) return start;
  const points = [low, high].map((end) =>
    Math.abs(end) < 0.005 ? 'equal weights' : Math.abs(end - 1) < 0.005 ? 'weights by size' : null,
  );
  const ends = points.filter((one) => one !== null);
  return `${start} Over that range ${list(courses)}.${ends.length > 0 ? ` (An end of it is ${list(ends)}.)` : ''}`;
}

function courseOf({ ranges }: ExponentSupport, coefficients: readonly Coefficient[], term: string): string[] {
  const range = ranges.find((one) => one.term === term);
  const own = coefficients.find((one) => one.term === term);
  if (range === undefined || own === undefined) return [];
  const decimals = decimalsBy(own.se, own.estimate);
  const zero = range.excludesZero ? 'its interval excludes zero throughout' : 'its interval takes zero in somewhere';
  return [
    `the coefficient of ${term} runs from ${number(range.low, { decimals })} to ${number(range.high, { decimals })} and ${zero}`,
  ];
}

/** What d = 0 and d = 1 are. */
export const scanRemark = 'd = 0 is equal weights, d = 1 weights by size.';
