import type * as v from 'valibot';
import { isAbsent, isBarred, type Node, nodeOf, type ObjectNode, optionFor, own, variantFor } from './schema-nodes';

/**
 * A value of a schema with every default of the schema filled in: keys in the schema's order, null where nothing was said.
 *
 * The value must have no fault (`faultsIn`). Maps keep their order and every key, `__proto__` and `constructor` included. Filling what was
 * filled changes nothing.
 */
export function filledBy<S extends v.GenericSchema>(schema: S, value: unknown): v.InferOutput<S> {
  return filled(nodeOf(schema), value) as v.InferOutput<S>;
}

function filled(node: Node, value: unknown): unknown {
  switch (node.type) {
    case 'nullish':
      if (!isAbsent(value)) return filled(node.wrapped, value);
      return isAbsent(node.default) ? null : filled(node.wrapped, node.default);
    case 'nullable':
      return value === null ? null : filled(node.wrapped, value);
    case 'lazy':
      return filled(node.getter(), value);
    case 'array':
      return (value as readonly unknown[]).map((item) => filled(node.item, item));
    case 'strict_tuple':
      return node.items.map((item, i) => filled(item, (value as readonly unknown[])[i]));
    case 'record':
      return Object.fromEntries(Object.entries(value as object).map(([key, part]) => [key, filled(node.value, part)]));
    case 'strict_object':
      return filledObject(node, value as object);
    case 'variant':
      return filledObject(
        variantFor(node.options, node.key, own(value as object, node.key)) as ObjectNode,
        value as object,
      );
    case 'union':
      return filled(optionFor(node.options, value) as Node, value);
    default:
      return value === 0 ? 0 : value;
  }
}

function filledObject(form: ObjectNode, value: object): object {
  return Object.fromEntries(
    Object.entries(form.entries)
      .filter(([, entry]) => !isBarred(entry))
      .map(([key, entry]) => [key, filled(entry, own(value, key))]),
  );
}
