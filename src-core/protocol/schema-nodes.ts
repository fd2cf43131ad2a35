import type * as v from 'valibot';
import type { JsonType } from './problems';

/** What the walkers see of a valibot schema: its kind and what it holds. */
export type Node = (
  | { readonly type: 'string' | 'number' | 'boolean' | 'null' }
  | { readonly type: 'literal'; readonly literal: string }
  | { readonly type: 'picklist'; readonly options: readonly string[] }
  | { readonly type: 'array'; readonly item: Node }
  | { readonly type: 'strict_tuple'; readonly items: readonly Node[] }
  | { readonly type: 'record'; readonly value: Node }
  | ObjectNode
  | { readonly type: 'variant'; readonly key: string; readonly options: readonly ObjectNode[] }
  | { readonly type: 'union'; readonly options: readonly Node[] }
  | { readonly type: 'nullish' | 'nullable' | 'optional'; readonly wrapped: Node; readonly default?: unknown }
  | { readonly type: 'lazy'; readonly getter: () => Node }
) & { readonly pipe?: readonly unknown[] };

export interface ObjectNode {
  readonly type: 'strict_object';
  readonly entries: Readonly<Record<string, Node>>;
}

/** One check after a schema, such as a bound. */
export interface Action {
  readonly type: string;
  readonly requirement: number;
}

export function nodeOf(schema: v.GenericSchema): Node {
  // A valibot schema is plain data, and ours use no kind but those above: a test walks them all.
  return schema as unknown as Node;
}

/** The checks of a schema, in order. */
export function actionsOf(node: Node): readonly Action[] {
  return (node.pipe?.slice(1) ?? []) as readonly Action[];
}

/** The JSON type of a value; what JSON cannot hold counts as the null that it would be written as. */
export function jsonTypeOf(value: unknown): JsonType {
  if (Array.isArray(value)) return 'array';
  if (typeof value === 'number') return Number.isFinite(value) ? 'number' : 'null';
  if (typeof value === 'string' || typeof value === 'boolean') return typeof value as JsonType;
  return typeof value === 'object' && value !== null ? 'object' : 'null';
}

export function isAbsent(value: unknown): value is null | undefined {
  return value === null || value === undefined;
}

/** An own value of an object under a key; undefined without one. */
export function own(holder: object, key: string): unknown {
  return Object.hasOwn(holder, key) ? (holder as Record<string, unknown>)[key] : undefined;
}

/** The JSON types that a schema takes, in order, each once. */
export function jsonTypesOf(node: Node): JsonType[] {
  switch (node.type) {
    case 'literal':
    case 'picklist':
      return ['string'];
    case 'strict_tuple':
      return ['array'];
    case 'record':
    case 'strict_object':
    case 'variant':
      return ['object'];
    case 'union':
      return [...new Set(node.options.flatMap(jsonTypesOf))];
    case 'nullable':
    case 'nullish':
    case 'optional':
      return [...jsonTypesOf(node.wrapped), 'null'];
    case 'lazy':
      return jsonTypesOf(node.getter());
    default:
      return [node.type];
  }
}

/** Whether a key is one that other forms of the object have and this one excludes. */
export function isBarred(entry: Node): boolean {
  return entry.type === 'optional' && entry.wrapped.type === 'null';
}

/** The keys that a form of an object takes. */
export function keysOf(form: ObjectNode): string[] {
  return Object.keys(form.entries).filter((key) => !isBarred(form.entries[key] as Node));
}

/** Of several forms of an object, the one that takes most of the keys present; the first of equals. */
function formFor(forms: readonly ObjectNode[], value: object): ObjectNode {
  const present = Object.keys(value).filter((key) => !isAbsent(own(value, key)));
  const taken = forms.map((form) => keysOf(form).filter((key) => present.includes(key)).length);
  return forms[taken.indexOf(Math.max(...taken))] as ObjectNode;
}

/** The option of a union that a value means, by its JSON type and, among objects, its keys; null where no option takes its type. */
export function optionFor(options: readonly Node[], value: unknown): Node | null {
  const type = jsonTypeOf(value);
  const fitting = options.filter((option) => jsonTypesOf(option).includes(type));
  const forms = fitting.filter((option): option is ObjectNode & Node => option.type === 'strict_object');
  if (forms.length > 1) return formFor(forms, value as object) as Node;
  return fitting[0] ?? null;
}

/** The option of a variant that its key names; undefined for a word that is in none. */
export function variantFor(options: readonly ObjectNode[], key: string, word: unknown): ObjectNode | undefined {
  return options.find((option) => wordsOf(option.entries[key] as Node).includes(word as string));
}

/** The words that a literal or a list takes. */
export function wordsOf(node: Node): readonly string[] {
  if (node.type === 'literal') return [node.literal];
  return node.type === 'picklist' ? node.options : [];
}
