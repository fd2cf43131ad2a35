import { type Pair, parseDecimal } from '../numbers/double-double';
import type { NumberStyle } from '../protocol/source';

/** Marks that may stand between groups of three digits: point, comma, space, no-break, narrow no-break, apostrophe, raised comma. */
export const groupMarks = ['.', ',', ' ', '\u00a0', '\u202f', "'", '\u2019'] as const;

const outerSpace = /^[\p{Zs}\t\r\n]+|[\p{Zs}\t\r\n]+$/gu;
const mayHaveOuterSpace = /^[^!-~]|[^!-~]$/;

/**
 * A text without the spaces around it: every space of Unicode, tabs and line ends, but no hidden character (U+200B, U+FEFF ...).
 *
 * Example: `trimmed(' 12\u00a0')` is "12".
 */
export function trimmed(text: string): string {
  return mayHaveOuterSpace.test(text) ? text.replace(outerSpace, '') : text;
}

/**
 * Gives a maker of plain numbers: what a text says under a style, as sign, digits, at most one point and an exponent; null where it is no number.
 *
 *     [+ - −] digits [mark digits] [e exponent], groups of exactly three digits by one mark
 *
 * A grouped number does not begin with 0 ("0,204" is a decimal or nothing). Outer spaces count for nothing.
 *
 * Example: `plainNumberIn({ decimal: ',', group: '.' })('1.204,5')` is "1204.5".
 */
export function plainNumberIn(style: NumberStyle): (text: string) => string | null {
  const decimal = style.decimal === '.' ? '\\.' : ',';
  const group = style.group === null ? null : style.group.replace(/[\\^$.*+?()[\]{}|]/g, '\\$&');
  const whole = group === null ? '\\d+' : `\\d+|[1-9]\\d{0,2}(?:${group}\\d{3})+`;
  const grammar = new RegExp(
    `^([+\\-\\u2212]?)(?:(${whole})(?:${decimal}(\\d*))?|${decimal}(\\d+))([eE][+\\-\\u2212]?\\d+)?$`,
  );
  return (text) => {
    const found = grammar.exec(trimmed(text));
    if (!found) return null;
    const [, sign = '', integer, fraction = '', fractionAlone, exponent = ''] = found;
    const digits = style.group === null ? integer : integer?.replaceAll(style.group, '');
    const point = integer === undefined ? `0.${fractionAlone}` : fraction === '' ? digits : `${digits}.${fraction}`;
    return `${sign === '+' || sign === '' ? '' : '-'}${point}${exponent.replace('\u2212', '-')}`;
  };
}

/**
 * Gives a reader of numbers in a style, to some 31 digits.
 *
 * Null for what is no number in the style, and for what lies beyond the range of a double ("1e999").
 *
 * Example: `numberReaderIn({ decimal: '.', group: null })('-9.0')` is [-9, 0].
 */
export function numberReaderIn(style: NumberStyle): (text: string) => Pair | null {
  const plain = plainNumberIn(style);
  return (text) => {
    const digits = plain(text);
    return digits === null ? null : parseDecimal(digits);
  };
}

/**
 * Reads one number in a style; `numberReaderIn` where there are many.
 *
 * Example: `readNumber('1 204', { decimal: '.', group: ' ' })` is [1204, 0].
 */
export function readNumber(text: string, style: NumberStyle): Pair | null {
  return numberReaderIn(style)(text);
}
