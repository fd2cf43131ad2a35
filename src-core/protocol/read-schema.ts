import * as v from 'valibot';
import type { Limit, Omit, Read } from './plan';
import { barred, name, oneOf, orNull, positive, shaped, text, textOrNumber } from './shapes';

/** How a file is read, for plans and tabulations. */

const status = v.picklist([
  'value',
  'true-zero',
  'rounds-to-zero',
  'suppressed-confidential',
  'suppressed-unreliable',
  'suppressed-unknown',
  'not-collected',
  'not-applicable',
  'interval',
  'provisional',
  'estimated',
  'low-reliability',
  'blank',
]);

/** Marks that may stand between groups of three digits: point, comma, space, no-break and narrow no-break space, apostrophes, none. */
const group = oneOf(['.', ',', ' ', '\u00a0', '\u202f', "'", '\u2019', 'none']);

export const readSchema = v.nullish(
  shaped<Read>()(
    v.strictObject({
      encoding: orNull(v.picklist(['utf-8', 'utf-16le', 'utf-16be', 'windows-1252'])),
      delimiter: orNull(name),
      decimal: orNull(v.picklist(['.', ','])),
      group: orNull(group),
      statuses: v.nullish(v.record(v.string(), status), {}),
      missing: v.nullish(v.record(v.string(), v.array(v.string())), {}),
      footnotes: v.nullish(v.array(name), []),
    }),
  ),
  {},
);

/** Values, or a range; both ends inclusive. */
const which = v.union([
  v.pipe(v.array(textOrNumber), v.nonEmpty()),
  v.strictObject({ from: orNull(textOrNumber), to: orNull(textOrNumber) }),
]);

/** A rule for rows, with its reason: of `omit`, and of `admit`. */
export const ruleSchema = shaped<Omit>()(v.strictObject({ column: name, is: which, because: name }));

export const limitSchema = shaped<Limit>()(
  v.union([
    v.strictObject({ rounding: positive, suppressed: barred }),
    v.strictObject({ rounding: barred, suppressed: v.strictTuple([v.nullable(v.number()), v.nullable(v.number())]) }),
  ]),
);

export const disclosureSchema = orNull(v.strictObject({ profile: name, version: name }));
export const titleSchema = v.nullish(text, '');
