import { type Decimals, logOf, powerOf, reciprocalOf, rootOf } from '../numbers/decimals';
import type { SimpleTerm, Transform } from '../protocol/plan';

/** A term after it has met the data: a category knows its levels, so that it can be turned into columns, for these cells or for a new one. */
export interface KnownTerm {
  /** Index in plan.terms; -1 for the intercept. */
  readonly term: number;
  /** None for the intercept, one for a term that stands alone, two or more for a product. */
  readonly factors: readonly KnownFactor[];
  /** Coefficient names, in column order: the first factor slowest. */
  readonly names: readonly string[];
}

export type KnownFactor =
  | { readonly kind: 'number'; readonly column: string; readonly form: NumberForm; readonly name: string }
  | {
      readonly kind: 'category';
      readonly column: string;
      /** Every level of the used cells, in code-point order, the baseline included. */
      readonly levels: readonly string[];
      /** Those that have a column. */
      readonly shown: readonly string[];
    };

export type NumberForm = { readonly as: 'itself' | Transform } | { readonly as: 'power'; readonly power: number };

export function formOf(term: Exclude<SimpleTerm, { as: 'category' }>): NumberForm {
  if ('transform' in term) return { as: term.transform };
  if ('power' in term) return { as: 'power', power: term.power };
  return { as: 'itself' };
}

/** A number's column in its form, in double-double. Values outside the form's range come out as not finite. */
export function formed(values: Decimals, form: NumberForm): Decimals {
  if (form.as === 'power') return powerOf(values, form.power);
  if (form.as === 'log') return logOf(values);
  if (form.as === 'sqrt') return rootOf(values);
  return form.as === 'inverse' ? reciprocalOf(values) : values;
}

/** How a form is called where a value cannot take it. */
export function formName(form: NumberForm): string {
  return form.as === 'power' ? `power ${form.power}` : form.as;
}

/** Whether a single value can take a form. */
export function canTake(value: number, form: NumberForm): boolean {
  if (!Number.isFinite(value)) return false;
  if (form.as === 'power')
    return (
      value > 0 || (Number.isInteger(form.power) && (value !== 0 || form.power >= 0)) || (value === 0 && form.power > 0)
    );
  if (form.as === 'log') return value > 0;
  if (form.as === 'sqrt') return value >= 0;
  return form.as !== 'inverse' || value !== 0;
}
