import * as v from 'valibot';
import { disclosureSchema, readSchema, ruleSchema, titleSchema } from './read-schema';
import { mustBeStated, name, names, notNegative, orNull, positive, shaped, textOrNumber } from './shapes';
import type { Replicates, TabulatedOutcome, Tabulation } from './tabulation';

// Entries stand in the contract's order: the normal form takes it over.

const values = v.pipe(v.array(textOrNumber), v.nonEmpty());

const outcome = shaped<TabulatedOutcome>()(
  v.variant('kind', [
    v.strictObject({ kind: v.literal('mean'), of: name }),
    v.strictObject({ kind: v.literal('share'), of: name, is: values }),
    v.strictObject({ kind: v.literal('ratio'), of: name, over: name }),
    v.strictObject({ kind: v.literal('rate'), of: name, exposure: name, per: v.nullish(positive, 1) }),
  ]),
);

const replicates = shaped<Replicates>()(
  v.strictObject({
    columns: names,
    rule: mustBeStated(
      v.picklist([
        'balanced-half',
        'fay',
        'delete-one',
        'delete-one-per-stratum',
        'bootstrap',
        'successive-difference',
        'provider',
      ]),
    ),
    perReplicate: orNull(values),
    overall: orNull(notNegative),
    around: v.nullish(v.picklist(['full-sample', 'replicate-mean']), 'full-sample'),
  }),
);

/** The tabulation as a person writes it; a normal form is one of these. */
export const tabulationSchema = shaped<Tabulation>()(
  v.strictObject({
    format: v.literal('steelyard-tabulation/1'),
    title: titleSchema,
    microdata: v.strictObject({
      file: v.union([name, names]),
      read: readSchema,
      weight: orNull(name),
      stratum: orNull(name),
      psu: orNull(name),
      psusInPopulation: orNull(name),
      replicates: orNull(replicates),
    }),
    outcome: v.union([outcome, v.pipe(v.array(outcome), v.nonEmpty())]),
    cells: v.pipe(
      v.array(
        v.strictObject({
          column: name,
          bands: orNull(v.pipe(v.array(v.number()), v.nonEmpty(), v.minLength(2))),
        }),
      ),
      v.nonEmpty(),
    ),
    admit: v.nullish(v.array(ruleSchema), []),
    variance: v.nullish(v.picklist(['linearised', 'replicates']), 'linearised'),
    onePsuStrata: v.nullish(
      v.union([
        v.picklist(['refuse', 'around-overall-mean']),
        v.strictObject({ merge: v.pipe(v.record(v.string(), v.string()), v.minEntries(1)) }),
      ]),
      'refuse',
    ),
    disclosure: disclosureSchema,
  }),
);
