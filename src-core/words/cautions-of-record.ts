import type { CautionCode, CautionFacts } from '../protocol/cautions';
import { interceptName } from '../protocol/term-names';
import { type CautionSentences, shiftSentence } from './caution-parts';
import { count, list, listSome, number, plural, pluralWord, quoted, rangeText } from './numbers';
import { omissionPhrase } from './omissions';

type RecordCode = Extract<
  CautionCode,
  | 'structures-tried'
  | 'errors-taken-as-exact'
  | 'cells-omitted'
  | 'values-marked'
  | 'join-unmatched'
  | 'sizes-within'
  | 'labels-look-alike'
>;

/** What stands for the record. */
export const recordCautions: CautionSentences<RecordCode> = {
  'structures-tried': ({ tried, ranges }) =>
    `${pluralWord(tried, 'variance structure')} ${tried === 1 ? 'was' : 'were'} tried with the answer in view, and intervals ignore the choice among them.${rangesOf(ranges)}`,
  'errors-taken-as-exact': ({ cells }) =>
    `The given errors of ${plural(cells, 'cell')} are taken as exact: no degrees of freedom were stated for them. If they come from few respondents, intervals are too short; state their freedom.`,
  'cells-omitted': ({ rows, used, omitted, reasons }) =>
    `Of ${plural(rows, 'row')}, ${count(used)} ${used === 1 ? 'is' : 'are'} used and ${count(omitted)} left out: ${list(Object.entries(reasons).map(([code, n]) => `${count(n)} ${omissionPhrase(code)}`))}. The data section names them.`,
  'values-marked': ({ column, status, cells }) =>
    `${pluralWord(cells, 'value')} of ${column} ${cells === 1 ? 'is' : 'are'} marked by the source as ${marks[status]}, and used as ${cells === 1 ? 'it stands' : 'they stand'}.`,
  'join-unmatched': ({ file, ours, theirs }) =>
    `Joining ${quoted(file)}: ${plural(ours, 'key')} of the main file met nothing there${ours === 0 ? '' : ', and those rows have no value from it'}; ${plural(theirs, 'key')} of it met nothing here.`,
  'sizes-within': ({ within, shift }, plan) =>
    `Sizes are known to within ${number(within, { digits: 3 })} only; weights by size share that uncertainty.${shiftSentence(shift ?? null, plan, 'Moved that far the worst way, the coefficient of')}`,
  'labels-look-alike': ({ labels, rows }) =>
    `Labels that look alike differ by characters nobody sees: ${listSome(labels.map(quoted))} (rows ${listSome(rows.map(count))}). If they mean the same cell or group, mend the file.`,
};

const marks = {
  'rounds-to-zero': 'rounding to zero',
  provisional: 'provisional',
  estimated: 'estimated',
  'low-reliability': 'of low reliability',
} as const;

/** The ranges of at most four coefficients, the widest left to the tables. */
function rangesOf(ranges: CautionFacts['structures-tried']['ranges']): string {
  const told = ranges.filter(({ term }) => ranges.length === 1 || term !== interceptName).slice(0, 4);
  if (told.length === 0) return '';
  const phrases = told.map(({ term, low, high }) => `${term} runs from ${rangeShown(low, high)}`);
  return ` Over them ${list(phrases)}.`;
}

/** To three significant digits of the larger end, or to five where the two would hardly differ. */
function rangeShown(low: number, high: number): string {
  const size = Math.max(Math.abs(low), Math.abs(high));
  const apart = high - low;
  const text = number(size, { digits: apart > 0.01 * size || apart === 0 ? 3 : 5 });
  if (text.includes('×')) return `${number(low, { digits: 3 })} to ${number(high, { digits: 3 })}`;
  return rangeText(low, high, text.split('.')[1]?.length ?? 0);
}
