import { log } from '../numbers/elementary';
import { exact } from '../words/numbers';

/** One axis: its ends, and whether equal steps are equal factors. */
export interface Range {
  readonly min: number;
  readonly max: number;
  readonly log: boolean;
}

/** Where a value stands between the ends, from 0 to 1. */
export function placeIn({ min, max, log: byFactor }: Range, value: number): number {
  return byFactor ? log(value / min) / log(max / min) : (value - min) / (max - min);
}

/** A range that holds all values with a little room at both ends; log ranges take values above 0 only. */
export function rangeAround(
  values: readonly number[],
  { log: byFactor = false, room = 0.05 }: { readonly log?: boolean; readonly room?: number } = {},
): Range {
  const known = values.filter((value) => Number.isFinite(value) && (!byFactor || value > 0));
  if (known.length === 0) return byFactor ? { min: 1, max: 10, log: true } : { min: 0, max: 1, log: false };
  let low = known[0] as number;
  let high = low;
  for (const value of known) {
    if (value < low) low = value;
    if (value > high) high = value;
  }
  return byFactor ? factorRange(low, high, room) : stepRange(low, high, room);
}

function stepRange(low: number, high: number, room: number): Range {
  const width = high - low || Math.max(Math.abs(high), 1e-9);
  const pad = high > low ? room * width : 0.5 * width;
  return { min: low - pad, max: high + pad, log: false };
}

function factorRange(low: number, high: number, room: number): Range {
  const ratio = high / low > 1.05 ? high / low : 4;
  const factor = 1 + room * 4 * Math.min(1, log(ratio));
  return high / low > 1.05
    ? { min: low / factor, max: high * factor, log: true }
    : { min: low / 2, max: high * 2, log: true };
}

/** Round values inside a range: steps of 1, 2 or 5 times a power of ten, or those values themselves on a log axis. */
export function ticksOf(range: Range, most = 6): number[] {
  return range.log ? factorTicks(range, most) : stepTicks(range, most);
}

function stepTicks({ min, max }: Range, most: number): number[] {
  const rough = (max - min) / Math.max(1, most - 1);
  const exponent = exponentOf(rough);
  const step = [1, 2, 5, 10].map((lead) => lead * power(exponent)).find((one) => (max - min) / one <= most) as number;
  const first = Math.ceil(min / step - 1e-9);
  const last = Math.floor(max / step + 1e-9);
  return Array.from({ length: Math.max(0, last - first + 1) }, (_, i) => Number(((first + i) * step).toPrecision(12)));
}

function factorTicks(range: Range, most: number): number[] {
  const low = exponentOf(range.min);
  const high = exponentOf(range.max) + 1;
  const inside = (leads: readonly number[], every = 1): number[] =>
    Array.from({ length: high - low + 1 }, (_, i) => low + i)
      .filter((exponent) => exponent % every === 0)
      .flatMap((exponent) => leads.map((lead) => Number((lead * power(exponent)).toPrecision(12))))
      .filter((value) => value >= range.min * (1 - 1e-9) && value <= range.max * (1 + 1e-9));
  for (const leads of [[1, 2, 5], [1, 3], [1]]) {
    const found = inside(leads);
    if (found.length >= 2 && found.length <= most) return found;
  }
  for (let every = 2; every <= high - low; every++) {
    const found = inside([1], every);
    if (found.length <= most) return found;
  }
  return stepTicks(range, most).filter((value) => value > 0);
}

function exponentOf(value: number): number {
  return Number(value.toExponential().split('e')[1]);
}

function power(exponent: number): number {
  return Number(`1e${exponent}`);
}

/** A tick as it is written beside its axis. */
export function tickText(value: number): string {
  const size = Math.abs(value);
  if (size !== 0 && (size < 1e-4 || size >= 1e6)) {
    const [lead = '', exponent = '0'] = value.toExponential().split('e');
    const raised = [...exponent.replace('+', '')].map((c) => (c === '-' ? '⁻' : '⁰¹²³⁴⁵⁶⁷⁸⁹'[Number(c)])).join('');
    return lead === '1' ? `10${raised}` : `${lead.replace('-', '\u2212')}·10${raised}`;
  }
  return exact(value);
}
