import * as v from 'valibot';
import type { Correlation, Freedom, Part, Rival, Scale, SimpleTerm, Target, Term, Variance } from './plan';
import { barred, barredProduct, mustBeStated, name, names, orNull, positive, shaped } from './shapes';

// Entries stand in the contract's order: the normal form takes it over.

const without = { transform: barred, power: barred, as: barred, baseline: barred };

function simpleForms<P extends v.ObjectEntries>(more: P) {
  const column = { column: name, ...without };
  return [
    v.strictObject({ ...column, ...more }),
    v.strictObject({ ...column, transform: v.picklist(['log', 'sqrt', 'inverse']), ...more }),
    v.strictObject({ ...column, power: v.pipe(v.number(), v.integer(), v.minValue(1)), ...more }),
    v.strictObject({ ...column, as: v.picklist(['category']), baseline: orNull(v.string()), ...more }),
  ] as const;
}

/** A term of a log-linear part. */
const loneTerm = shaped<SimpleTerm>()(v.union([...simpleForms({})]));

/** A factor of a product. */
const factor = shaped<SimpleTerm>()(v.union([...simpleForms({ product: barredProduct })]));

export const termSchema = shaped<Term>()(
  v.union([
    ...simpleForms({ product: barred }),
    v.strictObject({ column: barred, ...without, product: v.pipe(v.array(factor), v.nonEmpty(), v.minLength(2)) }),
  ]),
);

const correlation = orNull(
  shaped<Correlation>()(
    v.variant('kind', [
      v.strictObject({ kind: v.literal('exchangeable'), by: names }),
      v.strictObject({ kind: v.literal('serial'), by: v.array(name), order: name }),
    ]),
  ),
);

const scale = shaped<Scale>()(mustBeStated(v.picklist(['fixed', 'free'])));
const freedom = shaped<Freedom>()(orNull(v.union([positive, v.strictObject({ column: name })])));
const exponent = v.union([v.number(), v.picklist(['estimate'])]);

const partSchema = shaped<Part>()(
  v.variant('kind', [
    v.strictObject({ kind: v.literal('constant'), correlation }),
    v.strictObject({ kind: v.literal('per-size'), correlation }),
    v.strictObject({ kind: v.literal('given'), scale, freedom, correlation }),
    v.strictObject({ kind: v.literal('matrix'), file: name, scale, freedom, correlation: barred }),
    v.strictObject({ kind: v.literal('size-power'), exponent, correlation }),
    v.strictObject({ kind: v.literal('proxy'), column: name, exponent: v.nullish(exponent, 1), correlation }),
    v.strictObject({ kind: v.literal('log-linear'), terms: v.pipe(v.array(loneTerm), v.nonEmpty()), correlation }),
    v.strictObject({
      kind: v.literal('per-class'),
      column: name,
      perSize: v.nullish(v.boolean(), false),
      correlation,
    }),
    v.strictObject({ kind: v.literal('binomial'), scale, correlation }),
    v.strictObject({ kind: v.literal('counts'), scale, correlation }),
    v.strictObject({ kind: v.literal('between'), correlation }),
    v.strictObject({ kind: v.literal('shared'), by: names, correlation: barred }),
  ]),
);

export const varianceSchema = shaped<Variance>()(
  v.strictObject({ parts: v.array(partSchema), fixed: v.nullish(v.record(v.string(), v.number()), {}) }),
);

export const targetSchema = shaped<Target>()(
  v.union([v.picklist(['structure', 'persons', 'cells', 'diagonal']), varianceSchema]),
);

export const rivalSchema = shaped<Rival>()(v.union([v.picklist(['constant', 'per-size', 'given']), varianceSchema]));
