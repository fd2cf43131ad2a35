import type * as v from 'valibot';
import { nearestName } from './nearest';
import { problem } from './outcome';
import { below } from './pointer';
import type { Problem } from './problems';
import {
  actionsOf,
  isAbsent,
  isBarred,
  jsonTypeOf,
  jsonTypesOf,
  keysOf,
  type Node,
  nodeOf,
  type ObjectNode,
  optionFor,
  own,
  variantFor,
  wordsOf,
} from './schema-nodes';
import { isBarredProduct, isStatedAlways } from './shapes';

/** Where a value stands: its JSON pointer, and the last key on the way to it. */
interface Place {
  readonly at: string;
  readonly key: string;
}

/**
 * Everything in which a value departs from a schema, each departure with its place and facts; empty for a value of the schema.
 *
 * The walk takes the schema as data and goes on past a fault, so that all of them are found. Null counts as absent in a key that may be
 * left out. What a key demands of other keys is not seen here.
 *
 * Example: `faultsIn(planSchema, { format: 'steelyard-plan/1' })` lacks the keys data, roles and variance.
 */
export function faultsIn(schema: v.GenericSchema, value: unknown, at = ''): Problem[] {
  return faults(nodeOf(schema), value, { at, key: '' });
}

function faults(node: Node, value: unknown, place: Place): Problem[] {
  switch (node.type) {
    case 'nullish':
    case 'optional':
      return isAbsent(value) ? [] : faults(node.wrapped, value, place);
    case 'nullable':
      return value === null ? [] : faults(node.wrapped, value, place);
    case 'lazy':
      return faults(node.getter(), value, place);
    case 'union': {
      const option = optionFor(node.options, value);
      if (option === null) return wrongType(node, value, place);
      return option.type === 'strict_object'
        ? objectFaults(option, value as object, place, node)
        : faults(option, value, place);
    }
    default: {
      const found = jsonTypesOf(node).includes(jsonTypeOf(value)) ? valueFaults(node, value, place) : null;
      return found ?? wrongType(node, value, place);
    }
  }
}

function wrongType(node: Node, value: unknown, place: Place): Problem[] {
  const expected = jsonTypesOf(node).join(' or ');
  return [problem('wrong-type', { found: jsonTypeOf(value), expected }, place.at)];
}

/** A value that has a JSON type of its schema. */
function valueFaults(node: Node, value: unknown, place: Place): Problem[] {
  const inside = (step: string | number, part: unknown, schema: Node) =>
    faults(schema, part, { at: below(place.at, step), key: typeof step === 'string' ? step : place.key });
  switch (node.type) {
    case 'literal':
    case 'picklist':
      return wordFaults(wordsOf(node), value, place);
    case 'number':
      return rangeFaults(node, value as number, place);
    case 'string':
      return lengthFaults(node, (value as string).length, place);
    case 'array': {
      const items = value as readonly unknown[];
      return [
        ...lengthFaults(node, items.length, place),
        ...Array.from(items).flatMap((item, i) => inside(i, item, node.item)),
      ];
    }
    case 'strict_tuple': {
      const items = value as readonly unknown[];
      const { length } = node.items;
      if (items.length !== length)
        return [problem('wrong-length', { found: items.length, expected: length }, place.at)];
      return node.items.flatMap((schema, i) => inside(i, items[i], schema));
    }
    case 'record': {
      const entries = Object.entries(value as object);
      return [
        ...lengthFaults(node, entries.length, place),
        ...entries.flatMap(([key, part]) => inside(key, part, node.value)),
      ];
    }
    case 'strict_object':
      return objectFaults(node, value as object, place, node);
    case 'variant':
      return variantFaults(node, value as object, place);
    default:
      return [];
  }
}

function wordFaults(words: readonly string[], value: unknown, place: Place): Problem[] {
  if (words.includes(value as string)) return [];
  return [problem('unknown-kind', { found: value, nearest: nearestName(value as string, words) }, place.at)];
}

function rangeFaults(node: Node, found: number, place: Place): Problem[] {
  const bounds = actionsOf(node);
  const bound = (...types: string[]) => bounds.find(({ type }) => types.includes(type))?.requirement ?? null;
  const [low, high] = [bound('min_value', 'gt_value'), bound('max_value', 'lt_value')];
  const held = bounds.every(({ type, requirement }) => {
    if (type === 'integer') return Number.isInteger(found);
    if (type === 'min_value') return found >= requirement;
    if (type === 'gt_value') return found > requirement;
    return type === 'max_value' ? found <= requirement : found < requirement;
  });
  return held ? [] : [problem('out-of-range', { found, low, high }, place.at)];
}

function lengthFaults(node: Node, found: number, place: Place): Problem[] {
  const actions = actionsOf(node);
  if (found === 0 && actions.length > 0) return [problem('empty-list', { key: place.key }, place.at)];
  const least = actions.find(({ type }) => type === 'min_length')?.requirement ?? 0;
  return found < least ? [problem('wrong-length', { found, expected: least }, place.at)] : [];
}

function variantFaults(node: Node & { type: 'variant' }, value: object, place: Place): Problem[] {
  const word = own(value, node.key);
  if (isAbsent(word)) {
    const choice = node.options[0]?.entries[node.key] as Node;
    return [lacking(node.key, choice, place)];
  }
  const wordPlace = { at: below(place.at, node.key), key: node.key };
  if (typeof word !== 'string')
    return [problem('wrong-type', { found: jsonTypeOf(word), expected: 'string' }, wordPlace.at)];
  const option = variantFor(node.options, node.key, word);
  if (option) return objectFaults(option, value, place, node);
  return wordFaults(
    node.options.flatMap((each) => wordsOf(each.entries[node.key] as Node)),
    word,
    wordPlace,
  );
}

function lacking(key: string, entry: Node, place: Place): Problem {
  if (!isStatedAlways(entry)) return problem('missing-key', { key }, place.at);
  const choices = wordsOf(entry);
  return problem('must-be-stated', { key, choices: choices.length > 0 ? choices : null }, place.at);
}

/** of: the variant, the union of forms, or the object schema itself from which the form was chosen. */
function objectFaults(form: ObjectNode, value: object, place: Place, of: Node): Problem[] {
  const entries = Object.entries(form.entries);
  const present = Object.keys(value).filter((key) => !isAbsent(own(value, key)));
  if (entries.some(([key, entry]) => isBarredProduct(entry) && present.includes(key)))
    return [problem('nested-product', {}, place.at)];
  const missing = entries
    .filter(([key, entry]) => !mayBeLeftOut(entry) && !(present.includes(key) || isStatedNull(entry, own(value, key))))
    .map(([key, entry]) => lacking(key, entry, place));
  const excluded = entries
    .filter(([key, entry]) => isBarred(entry) && present.includes(key))
    .map(([key]) => problem('not-together', { keys: excludingPair(key, present, of) }, place.at));
  const held = Object.keys(value).flatMap((key) => {
    const at = below(place.at, key);
    if (!Object.hasOwn(form.entries, key))
      return [problem('unknown-key', { found: key, nearest: nearestName(key, validKeys(form, of)) }, at)];
    const entry = form.entries[key] as Node;
    return isBarred(entry) || isAbsent(own(value, key)) ? [] : faults(entry, own(value, key), { at, key });
  });
  return [...missing, ...excluded, ...held];
}

function mayBeLeftOut({ type }: Node): boolean {
  return type === 'nullish' || type === 'optional';
}

/** A null that stands for itself, where the key must be there. */
function isStatedNull(entry: Node, value: unknown): boolean {
  return value === null && jsonTypesOf(entry).includes('null');
}

/** The keys that could have been meant: those of every form where the form is chosen by its keys. */
function validKeys(form: ObjectNode, of: Node): string[] {
  if (of.type !== 'union') return keysOf(form);
  return Object.keys(form.entries).filter((key) => !isBarredProduct(form.entries[key] as Node));
}

/** A key that the form bars, after the key that bars it: the variant's own, or the first that no form takes together with it. */
function excludingPair(barred: string, present: readonly string[], of: Node): string[] {
  if (of.type === 'variant') return [of.key, barred];
  const forms =
    of.type === 'union'
      ? of.options.filter((option): option is ObjectNode & Node => option.type === 'strict_object')
      : [];
  const inOrder = [...new Set(forms.flatMap((form) => Object.keys(form.entries)))].filter((key) =>
    present.includes(key),
  );
  const other = inOrder.find(
    (key) => key !== barred && !forms.some((form) => [key, barred].every((k) => keysOf(form).includes(k))),
  );
  return other === undefined ? [barred] : [other, barred];
}
