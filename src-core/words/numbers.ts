/** The only formatter: numbers, and names strung together, as text for screen and paper. No locale of the machine takes part. */

const minus = '\u2212';
/** Narrow no-break space: between groups of digits, and before the per cent sign. */
const narrow = '\u202f';

/** What stands where a quantity is undefined. */
export const undefinedText = '–';

/** How many digits: significant ones (4 where nothing is said), or decimals. */
export interface Digits {
  readonly digits?: number;
  readonly decimals?: number;
}

/**
 * A number as it is printed: with decimals if they are given, else to significant digits; whole digits are never cut.
 *
 * The minus sign is U+2212; from 10,000 up a narrow no-break space stands between groups of three; from 10^15 up, and below 0.0001 to
 * significant digits, a power of ten. A zero after rounding has no sign. null (undefined) gives a dash.
 *
 *     number(-1234.5678)                    // '−1235'
 *     number(0.00001234, { digits: 3 })     // '1.23 × 10⁻⁵'
 *     number(12345.678, { decimals: 1 })    // '12 345.7'
 */
export function number(value: number | null, { digits = 4, decimals }: Digits = {}): string {
  if (value === null || Number.isNaN(value)) return undefinedText;
  if (!Number.isFinite(value)) return value > 0 ? '∞' : `${minus}∞`;
  const size = Math.abs(value);
  if (size >= 1e15 || (decimals ?? 0) > 15) return withPower(value, digits);
  if (decimals !== undefined) return dressed(value, size.toFixed(Math.max(0, decimals)));
  if (size > 0 && size < 1e-4) return withPower(value, digits);
  return dressed(value, size.toFixed(decimalsFor(size, digits)));
}

/** Decimals that show a number to so many significant digits; none for whole digits. */
function decimalsFor(size: number, digits: number): number {
  if (size === 0) return 0;
  const exponent = Number(size.toExponential(digits - 1).split('e')[1]);
  return Math.max(0, digits - 1 - exponent);
}

function dressed(value: number, plain: string): string {
  const [whole, fraction] = plain.split('.') as [string, string | undefined];
  const grouped = whole.length > 4 ? whole.replace(/(?<=\d)(?=(?:\d{3})+$)/g, narrow) : whole;
  const sign = value < 0 && /[1-9]/.test(plain) ? minus : '';
  return `${sign}${grouped}${fraction === undefined ? '' : `.${fraction}`}`;
}

function withPower(value: number, digits: number): string {
  const [shown, exponent] = Math.abs(value)
    .toExponential(digits - 1)
    .split('e') as [string, string];
  return `${value < 0 ? minus : ''}${shown} × 10${raised(exponent)}`;
}

const raisedDigits = '⁰¹²³⁴⁵⁶⁷⁸⁹';

function raised(exponent: string): string {
  return [...exponent.replace('+', '')].map((mark) => (mark === '-' ? '⁻' : raisedDigits[Number(mark)])).join('');
}

/** A number written so that it reads back to the same double: for values that are quoted, not estimated. */
export function exact(value: number): string {
  const [plain, exponent] = String(Math.abs(value)).split('e') as [string, string | undefined];
  if (exponent !== undefined) return `${value < 0 ? minus : ''}${plain} × 10${raised(exponent)}`;
  return dressed(value, plain);
}

/** A size: whole ones as they are, others to four significant digits. */
export function sizeText(value: number | null): string {
  return value !== null && Number.isInteger(value) ? count(value) : number(value);
}

/** A whole number. */
export function count(value: number | null): string {
  return number(value, { decimals: 0 });
}

/**
 * A p value: three decimals, or below what.
 *
 *     p(0.00004)   // '< 0.001'
 *     p(0.25)      // '0.250'
 */
export function p(value: number | null): string {
  if (value === null) return undefinedText;
  if (value < 0.001) return '< 0.001';
  if (value > 0.999 && value < 1) return '> 0.999';
  return number(value, { decimals: 3 });
}

/** A p value inside a sentence: "p = 0.250", "p < 0.001". */
export function pIs(value: number | null): string {
  const shown = p(value);
  return /^[<>]/.test(shown) ? `p ${shown}` : `p = ${shown}`;
}

/**
 * A share as a percentage, to two significant digits where nothing is said; never 0 % or 100 % of what is neither.
 *
 *     percent(0.354)                    // '35 %'
 *     percent(0.0123)                   // '1.2 %'
 *     percent(0.9999)                   // '> 99 %'
 */
export function percent(share: number | null, { digits = 2, decimals }: Digits = {}): string {
  if (share === null) return undefinedText;
  const hundredth = 100 * share;
  const kept = decimals ?? Math.min(1, decimalsFor(Math.abs(hundredth), digits));
  const shown = Number(Math.abs(hundredth).toFixed(kept));
  const least = smallest(kept);
  if (shown === 0 && hundredth > 0) return `< ${number(least, { decimals: kept })}${narrow}%`;
  if (shown === 0 && hundredth < 0) return `> ${number(-least, { decimals: kept })}${narrow}%`;
  if (shown === 100 && share > 0 && share < 1) return `> ${number(100 - least, { decimals: kept })}${narrow}%`;
  return `${number(hundredth, { decimals: kept })}${narrow}%`;
}

/** One unit of the last of so many decimals. */
function smallest(decimals: number): number {
  return Number(`1e-${decimals}`);
}

/** A level as it was stated, in per cent: 0.95 gives "95 %", 0.995 "99.5 %". */
export function levelText(level: number): string {
  return `${exact(Number((100 * level).toPrecision(12)))}${narrow}%`;
}

/** "0.40 to 1.18"; an end that is undefined is a dash, both ends undefined are one. */
export function interval(low: number | null, high: number | null, as: Digits = {}): string {
  return low === null && high === null ? undefinedText : `${number(low, as)} to ${number(high, as)}`;
}

/**
 * The decimals to which an estimate and its interval are shown: so many as give two significant digits of its standard error, but
 * no fewer than four significant digits of the estimate where that error is undefined or zero.
 *
 *     decimalsBy(0.0932, 0.831)   // 3
 *     decimalsBy(12.3, 831.4)     // 0
 */
export function decimalsBy(se: number | null, estimate: number | null = null): number {
  if (se !== null && se > 0 && Number.isFinite(se)) return decimalsFor(se, 2);
  return estimate === null || estimate === 0 ? 2 : decimalsFor(Math.abs(estimate), 4);
}

/** An estimate with its interval to the decimals that its error governs: "0.83 (0.40 to 1.18)"; without an interval the estimate alone. */
export function estimateText(of: {
  readonly estimate: number | null;
  readonly low: number | null;
  readonly high: number | null;
  readonly se: number | null;
}): string {
  const decimals = decimalsBy(of.se, of.estimate);
  const shown = number(of.estimate, { decimals });
  return of.low === null && of.high === null ? shown : `${shown} (${interval(of.low, of.high, { decimals })})`;
}

/** "a", "a and b", "a, b and c". */
export function list(names: readonly string[], join = 'and'): string {
  return names.length < 2 ? names.join('') : `${names.slice(0, -1).join(', ')} ${join} ${names.at(-1)}`;
}

/** The first few of a long list: "a, b, c and 12 more". */
export function listSome(names: readonly string[], most = 5): string {
  return names.length <= most
    ? list(names)
    : `${names.slice(0, most).join(', ')} and ${count(names.length - most)} more`;
}

/** "1 cell", "12 cells". */
export function plural(value: number, one: string, many = `${one}s`): string {
  return `${count(value)} ${value === 1 ? one : many}`;
}

/** A name from the user's files, set off from the sentence. */
export function quoted(name: string): string {
  return `“${name}”`;
}

/** A count at the head of a sentence: in words up to twelve. */
export function numberWord(value: number): string {
  return smallNumbers[value] ?? number(value, { decimals: 0 });
}

const smallNumbers: { readonly [value: number]: string } = {
  0: 'None',
  1: 'One',
  2: 'Two',
  3: 'Three',
  4: 'Four',
  5: 'Five',
  6: 'Six',
  7: 'Seven',
  8: 'Eight',
  9: 'Nine',
  10: 'Ten',
  11: 'Eleven',
  12: 'Twelve',
};

/** "Five cells", "14 cells": a count with its noun at the head of a sentence. */
export function pluralWord(value: number, one: string, many = `${one}s`): string {
  return `${numberWord(value)} ${value === 1 ? one : many}`;
}

/**
 * "0.40 to 1.18", to more decimals where an end that is not zero would read as zero; an end that is zero is "0".
 *
 *     rangeText(-0.05302, 0.00027, 3)   // '−0.05302 to 0.00027'
 */
export function rangeText(low: number | null, high: number | null, decimals: number): string {
  const ends = [low, high];
  let kept = decimals;
  const vanishes = (value: number | null): boolean =>
    value !== null && value !== 0 && !/[1-9]/.test(number(value, { decimals: kept }));
  while (kept < decimals + 3 && ends.some(vanishes)) kept += 1;
  const [from, to] = ends.map((value) => (value === 0 ? '0' : number(value, { decimals: kept }))) as [string, string];
  return low === null && high === null ? undefinedText : `${from} to ${to}`;
}

/** As many names as take about so many letters: "a, b and 12 more"; at least one. */
export function listWithin(names: readonly string[], letters = 160): string {
  let most = 0;
  for (let taken = 0; most < names.length && (most === 0 || taken + (names[most]?.length ?? 0) <= letters); most++)
    taken += (names[most]?.length ?? 0) + 2;
  return listSome(names, most);
}

/** A share that may be far below one per cent, to two significant digits. */
export function smallPercent(share: number | null): string {
  if (share === null) return undefinedText;
  const size = Math.abs(share);
  return percent(share, { decimals: size >= 0.1 ? 0 : size >= 0.01 ? 1 : size >= 0.001 ? 2 : 3 });
}

/** "₁₂": a whole number as a subscript. */
export function subscript(value: number): string {
  return [...String(value)].map((digit) => '₀₁₂₃₄₅₆₇₈₉'[Number(digit)]).join('');
}
