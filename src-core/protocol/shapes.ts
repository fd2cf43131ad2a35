import * as v from 'valibot';

/** Pieces of which the schemas of plan, tabulation and result are made. */

type Same<A, B> = [A] extends [B] ? ([B] extends [A] ? true : false) : false;

/**
 * Takes a schema only if what it gives is the type stated, both ways; anything else does not compile.
 *
 *     const about = shaped<About>()(v.strictObject({ ... }))
 */
export function shaped<T>() {
  return <S extends v.GenericSchema>(schema: Same<v.InferOutput<S>, T> extends true ? S : never): S => schema as S;
}

/** A text that names something: a column, a file. */
export const name = v.pipe(v.string(), v.nonEmpty());

/** A list that must name something. */
export const names = v.pipe(v.array(name), v.nonEmpty());

export const positive = v.pipe(v.number(), v.gtValue(0));
export const notNegative = v.pipe(v.number(), v.minValue(0));

/** Strictly between 0 and 1: a level. */
export const level = v.pipe(v.number(), v.gtValue(0), v.ltValue(1));

export const text = v.string();
export const textOrNumber = v.union([v.number(), v.string()]);

/** Absent, null, or the schema; null where nothing was said. */
export function orNull<const S extends v.GenericSchema>(schema: S) {
  return v.nullish(schema, null);
}

export function whole(low: number, high?: number) {
  return high === undefined
    ? v.pipe(v.number(), v.integer(), v.minValue(low))
    : v.pipe(v.number(), v.integer(), v.minValue(low), v.maxValue(high));
}

/** A word of a list whose type the contract leaves at text. */
export function oneOf(words: readonly string[]): v.GenericSchema<string> {
  return v.picklist(words);
}

/** A key that another form of the object has and this one excludes. */
export const barred = v.optional(v.null());

const stated = new WeakSet<object>();

/** A choice that has no default and is reported as one when it is left out. */
export function mustBeStated<S extends v.GenericSchema>(schema: S): S {
  stated.add(schema);
  return schema;
}

export function isStatedAlways(schema: object): boolean {
  return stated.has(schema);
}

const notInProducts = new WeakSet<object>();

/** A barred key that makes its object a product where only a factor can stand. */
export const barredProduct = v.optional(v.null());
notInProducts.add(barredProduct);

export function isBarredProduct(schema: object): boolean {
  return notInProducts.has(schema);
}
