import type { Troubles } from '../protocol/problems';
import { count, exact, list, plural, quoted } from './numbers';
import { meant, type Sentences } from './phrases';
import { reasonFor } from './reasons';

type FormCode =
  | 'not-json'
  | 'wrong-format'
  | 'unknown-key'
  | 'unknown-kind'
  | 'missing-key'
  | 'wrong-type'
  | 'empty-list'
  | 'out-of-range'
  | 'must-be-stated'
  | 'not-together'
  | 'role-needed'
  | 'nested-product'
  | 'equal-names'
  | 'no-sampling-part'
  | 'two-sampling-parts'
  | 'two-between-parts'
  | 'not-identified'
  | 'not-linear'
  | 'correlated-cells'
  | 'unknown-parameter'
  | 'not-increasing'
  | 'wrong-length';

/** What is wrong in a plan or tabulation by itself. */
export const formSentences: Sentences<FormCode> = {
  'not-json': ({ line, column }) =>
    `The text stops being JSON at line ${line}, column ${column}. Look there for a missing comma, quote or bracket, a word without quotes, or a key given twice.`,
  'wrong-format': ({ found, expected }) =>
    `The format is ${shown(found)}; what is read here is ${quoted(expected)}. Choose the file that holds it, or correct the key "format".`,
  'unknown-key': ({ found, nearest }) => `There is no key ${quoted(found)} here.${meant(nearest, 'Leave it out.')}`,
  'unknown-kind': ({ found, nearest }) =>
    `${shown(found)} is none of the words that can stand here.${meant(nearest, 'Choose another.')}`,
  'missing-key': ({ key }, at) =>
    at !== null && /\/where$/.test(at)
      ? `The terms use the column ${quoted(key)}, and no value is stated for it here. Add one.`
      : `The key ${quoted(key)} is missing here. Add it.`,
  'wrong-type': ({ found, expected }) =>
    `Here stands ${typeName(found)}, where ${expectedTypes(expected)} should stand.`,
  'empty-list': ({ key }) => `${quoted(key)} is empty, and must name something.`,
  'out-of-range': outOfRange,
  'must-be-stated': ({ key, choices }) =>
    `${quoted(key)} has no default: ${choices === null ? 'state its value' : `choose ${list(choices.map(quoted), 'or')}`}.`,
  'not-together': ({ keys }) => `${list(keys.map(quoted))} cannot stand together like this. ${reasonFor(keys)}`,
  'role-needed': ({ role, part }) =>
    `${quoted(part)} needs to know the column of the ${roleName(role)}. Name it under roles.${role}, or choose something else than ${quoted(part)}.`,
  'nested-product': () => 'A factor of a product is itself a product. Write all factors into one list.',
  'equal-names': ({ name, first }) =>
    `The name ${quoted(name)} is taken already by ${first}. Leave one of the two out, or rename the column.`,
  'no-sampling-part': ({ parts }) =>
    parts.length === 0
      ? 'The variance has no parts. Add one that says how the sampling error of a cell arises, such as "given" or "per-size".'
      : `The variance consists of ${list(parts.map(quoted))} alone. Add a part that says how the sampling error of a cell arises, such as "given" or "per-size".`,
  'two-sampling-parts': ({ first, second }) =>
    `${quoted(first)} and ${quoted(second)} both say how the sampling error arises, and only one part can. Leave one of them out.`,
  'two-between-parts': ({ first }) =>
    `There is a between part already, at ${first}, and a second one is not offered. Leave one of them out.`,
  'not-identified': ({ parts }) =>
    `The parts ${list(parts.map(quoted))} say the same thing: no data can tell their variances apart. Leave one of them out, or set one of their parameters in "fixed".`,
  'not-linear': ({ part, parameter }) =>
    `Kenward-Roger inference needs variances that are linear in their parameters; in the part ${quoted(part)} they are not linear in ${quoted(parameter)}. Choose another inference, or set that parameter.`,
  'correlated-cells': ({ part, by }) =>
    `Robust errors (HC) need uncorrelated cells, and the part ${quoted(part)} correlates them${within(by)}. Choose clustered errors instead.`,
  'unknown-parameter': ({ found, nearest }) =>
    nearest === null
      ? `This structure has no variance parameter to set, so that ${quoted(found)} means nothing. Leave it out.`
      : `This structure has no variance parameter ${quoted(found)}.${meant(nearest)}`,
  'not-increasing': ({ column, before, found }) =>
    `The bands of ${quoted(column)} must rise, and ${exact(found)} follows ${exact(before)}. Put the limits in order.`,
  'wrong-length': ({ found, expected }) =>
    `${plural(found, 'entry', 'entries')} here, where ${count(expected)} ${expected === 1 ? 'is' : 'are'} needed.`,
};

/** A value from the plan, cut where it is long. */
function shown(value: unknown): string {
  const text = typeof value === 'string' ? value : (JSON.stringify(value) ?? 'nothing');
  return quoted(text.length > 60 ? `${text.slice(0, 57)}…` : text);
}

function within(by: readonly string[]): string {
  return by.length > 0 ? ` by ${list(by.map(quoted))}` : '';
}

const typeNames: ReadonlyMap<string, string> = new Map([
  ['string', 'a text'],
  ['number', 'a number'],
  ['boolean', 'true or false'],
  ['array', 'a list in square brackets'],
  ['object', 'an object in braces'],
  ['null', 'null'],
]);

function typeName(type: string): string {
  return typeNames.get(type) ?? type;
}

function expectedTypes(expected: string): string {
  return list(expected.split(' or ').map(typeName), 'or');
}

function outOfRange({ found, low, high }: Troubles['out-of-range']): string {
  const value = exact(found);
  const inside = (low === null || found > low) && (high === null || found < high);
  if (inside && !Number.isInteger(found)) return `${value} should be a whole number.`;
  const isPercentage = low === 0 && high === 1 && found > 1 && found <= 100;
  if (low !== null && high !== null)
    return `${value} should lie between ${exact(low)} and ${exact(high)}.${isPercentage ? ` ${exact(found)} per cent is written ${exact(found / 100)}.` : ''}`;
  if (low !== null)
    return found === low ? `${value} should be above ${exact(low)}.` : `${value} should be no less than ${exact(low)}.`;
  return high === null ? `${value} cannot stand here.` : `${value} should be no more than ${exact(high)}.`;
}

const roleNames: ReadonlyMap<string, string> = new Map([
  ['size', 'group sizes'],
  ['error', 'errors'],
  ['count', 'counts'],
  ['exposure', 'exposures'],
  ['outcome', 'outcome'],
]);

function roleName(role: string): string {
  return roleNames.get(role) ?? role;
}
