import { count, list, listSome, number, plural, quoted } from './numbers';
import { meant, pairs, place, type Sentences } from './phrases';

type DataCode =
  | 'file-not-found'
  | 'unknown-column'
  | 'reads-both-ways'
  | 'not-a-number'
  | 'empty-file'
  | 'undecodable'
  | 'malformed-row'
  | 'repeated-label'
  | 'join-keys-repeated'
  | 'name-clash'
  | 'count-above-size'
  | 'share-out-of-range'
  | 'transform-undefined'
  | 'order-repeats'
  | 'matrix-labels'
  | 'matrix-not-symmetric'
  | 'matrix-not-positive-definite'
  | 'no-cells-left'
  | 'weight-negative'
  | 'one-psu-stratum'
  | 'unknown-stratum';

/** What is wrong in the files that a plan names. */
export const dataSentences: Sentences<DataCode> = {
  'file-not-found': ({ file }) =>
    `There is no file ${quoted(file)}. File names are taken from the folder of the file that names them.`,
  'unknown-column': ({ found, nearest }) =>
    `There is no column ${quoted(found)} here.${meant(nearest, 'Check the header of the file.')}`,
  'reads-both-ways': ({ file, row, column, found, settle }) =>
    `${place(file, row, column)}: ${quoted(found)} can be read as two different numbers, and nothing in the file says which. State read.${settle}.`,
  'not-a-number': ({ file, row, column, found }) =>
    `${place(file, row, column)}: ${quoted(found)} is not a number. Correct it, or declare it as a status, a missing code or a footnote.`,
  'empty-file': ({ file }) => `${quoted(file)} has no header. Put the names of the columns into its first line.`,
  undecodable: ({ file, encoding, offset, row, column }) =>
    row === undefined
      ? `${quoted(file)} is not ${encoding}: byte ${count(offset)} (counted from 0) cannot stand there. State read.encoding, or save the file anew.`
      : `${quoted(file)}, ${row === 0 ? 'header' : `row ${count(row)}`}${column === undefined ? '' : `, column ${quoted(column)}`}: a zero character (byte ${count(offset)}) is no text. Save the file anew as ${encoding}.`,
  'malformed-row': ({ file, row, found, expected }) =>
    found === null
      ? `${quoted(file)}, row ${count(row)}: a quote does not close, or text follows one that has closed. Correct the quotes.`
      : `${quoted(file)}, row ${count(row)} has ${plural(found, 'field')}, and the header ${count(expected)}. Correct the row; delete titles and notes around the table.`,
  'repeated-label': ({ label, rows }) =>
    `Rows ${list(rows.map((row) => count(row)))} have the same label ${quoted(label)}. Add a column to the label, or omit all but one of them.`,
  'join-keys-repeated': ({ file, key, rows }) =>
    `${quoted(file)}: rows ${list(rows.map((row) => count(row)))} have the same key ${pairs(key)}. A joined file may hold each key once.`,
  'name-clash': ({ column, files }) =>
    `The name ${quoted(column)} is taken${files.length > 0 ? `: it stands in ${list(files.map(quoted))}` : ''}. Rename one of the columns.`,
  'count-above-size': ({ file, row, column, found, sizeColumn, size }) =>
    `${place(file, row, column)}: a count of ${found} exceeds the size of its cell, ${size} in ${quoted(sizeColumn)}. Correct one of them.`,
  'share-out-of-range': ({ file, row, column, found, unit }) =>
    `${place(file, row, column)}: ${quoted(found)} is outside ${unit === 'percent' ? '0 to 100' : '0 to 1'}, the range of a ${unit === 'percent' ? 'percentage' : unit}. Correct it, or state another roles.outcomeUnit.`,
  'transform-undefined': ({ file, row, column, found, transform }) =>
    `${place(file, row, column)}: the ${transformName(transform)} of ${found} is not defined. Choose another transform, or omit the row.`,
  'order-repeats': ({ column, found, group, labels }) =>
    `${list(labels.map(quoted))} have the same ${quoted(column)}, ${found},${Object.keys(group).length > 0 ? ` inside ${pairs(group)},` : ''} so that their order is not known. Choose another order column, or more columns in "by".`,
  'matrix-labels': ({ file, missing, unknown }) =>
    [
      missing.length > 0
        ? `${quoted(file)} lacks the ${missing.length === 1 ? 'cell' : 'cells'} ${listSome(missing.map(quoted))}.`
        : '',
      unknown.length > 0 ? `${quoted(file)} has labels that no cell has: ${listSome(unknown.map(quoted))}.` : '',
      'Labels must be written as in the data, several columns joined by " · ".',
    ]
      .filter((part) => part !== '')
      .join(' '),
  'matrix-not-symmetric': ({ file, labels: [row, column], found: [entry, mirror] }) =>
    `${quoted(file)}: the entry of ${quoted(row)} with ${quoted(column)} is ${entry}, and its mirror image ${mirror}. A covariance matrix is symmetric: correct one of them.`,
  'matrix-not-positive-definite': ({ file, labels, correlation, smallestEigenvalue }) =>
    labels !== null
      ? `${quoted(file)}: ${quoted(labels[0])} and ${quoted(labels[1])} would have a correlation of ${number(correlation)}, which no covariance matrix allows. Correct their entries.`
      : `${quoted(file)} is no covariance matrix of the used cells: its smallest eigenvalue is ${number(smallestEigenvalue)}, and must be above 0. If it rests on few degrees of freedom, state them under "freedom".`,
  'no-cells-left': ({ rows, reasons }) =>
    `None of the ${plural(rows, 'row')} can be used: ${list(Object.entries(reasons).map(([reason, n]) => `${count(n)} ${reasonName(reason)}`))}. Check the roles and the rules of omission.`,
  'weight-negative': ({ file, row, column, found }) =>
    `${place(file, row, column)}: a survey weight of ${found} is below 0. Correct it; a weight of 0 leaves the row out.`,
  'one-psu-stratum': ({ column, strata }) =>
    `${strata.length === 1 ? 'The stratum' : 'The strata'} ${listSome(strata.map(quoted))} of ${quoted(column)} ${strata.length === 1 ? 'has' : 'have'} one primary sampling unit, so that no variance can be had from ${strata.length === 1 ? 'it' : 'them'}. State onePsuStrata: merge, or around-overall-mean.`,
  'unknown-stratum': ({ found, nearest }) => `No row lies in a stratum ${quoted(found)}.${meant(nearest)}`,
};

const transformNames: ReadonlyMap<string, string> = new Map([
  ['log', 'logarithm'],
  ['sqrt', 'square root'],
  ['inverse', 'inverse'],
]);

function transformName(transform: string): string {
  return transformNames.get(transform) ?? transform;
}

const reasonNames: ReadonlyMap<string, string> = new Map([
  ['omit-rule', 'omitted by rule'],
  ['missing', 'missing'],
  ['size-not-positive', 'with a size not above 0'],
  ['error-not-positive', 'with an error not above 0'],
  ['exposure-not-positive', 'with an exposure not above 0'],
  ['suppressed-confidential', 'suppressed as confidential'],
  ['suppressed-unreliable', 'suppressed as unreliable'],
  ['suppressed-unknown', 'suppressed without a stated reason'],
  ['not-collected', 'not collected'],
  ['not-applicable', 'not applicable'],
  ['interval', 'known as an interval only'],
  ['blank', 'blank'],
]);

function reasonName(reason: string): string {
  return reasonNames.get(reason) ?? reason;
}
