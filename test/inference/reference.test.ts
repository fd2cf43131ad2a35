import { describe, expect, it } from 'vitest';
import { questionsOfCase, valueOf as valueOfQuantity } from '../reference/quantities-inference';
import {
  type CaseFit,
  cellsOf,
  type Expected,
  isDiagonal,
  loadCase,
  planOf,
  type ReferenceCase,
} from '../support/case';
import { fitOf, partsOf } from './whole-fit';

const cases = [
  'hand-per-size',
  'schools-per-size',
  'savings-hc',
  'physics-known-se',
  'physics-freedom',
  'physics-quadratic',
  'bcg-mean',
  'bcg-latitude',
  'branches-tau-zero',
  'schools-between-given',
  'schools-between-per-size',
  'library-between-per-size',
  'library-size-power',
  'library-no-intercept',
  'library-targets',
  'schools-questions',
  'schools-two-step',
  'areas-shrinkage',
  'schools-shrinkage',
  'nist-filip',
  'nist-longley',
  'nist-noint1',
  'nist-wampler1',
  'nist-wampler2',
  'nist-wampler3',
];

/** Beginnings of the quantities that other rooms give: tests of the structure, shrunken cells, the exponent scan. */
const elsewhere = new Set(
  'i_squared h_squared prediction_low prediction_high lr_statistic lr_p_mixture dumouchel_duncan_f shrunken shrinkage mse g1 g2 g3 profile_log_likelihood profile_restricted_log_likelihood sweep_coefficient'.split(
    ' ',
  ),
);

/** Relative; a value that the reference itself trusts to fewer digits is held to those. */
const CLOSE = 1e-10;

for (const id of cases) {
  const reference = loadCase(id);
  describe(`${id} (${reference.kind}): ${reference.title}`, () => {
    for (const fit of reference.fits.filter(isDiagonal))
      it(`${fit.fit} agrees with the outside values`, () => compare(reference, fit));
  });
}

function compare(reference: ReferenceCase, fit: CaseFit): void {
  const written = planOf(reference, fit);
  const plan = { ...written, questions: questionsOfCase(reference, written) };
  const result = partsOf(fitOf(plan, cellsOf(reference.id, plan)));
  const own = reference.expected.filter((each) => each.fit === fit.fit);
  const handled = own.filter(({ quantity }) => !elsewhere.has(quantity.split(':')[0] as string));
  expect(handled.length).toBeGreaterThan(0);
  const wrong = handled
    .map((each) => ({ ...each, found: valueOfQuantity(each.quantity, result) }))
    .filter((each) => !agrees(each.found, each));
  expect(wrong.map(({ quantity, value, found }) => ({ quantity, value, found }))).toEqual([]);
}

function agrees(found: number | null | undefined, { value, digits }: Expected): boolean {
  if (value === null || found === null || found === undefined) return found === value;
  if (value === 0) return Math.abs(found) < 1e-12;
  return Math.abs(found / value - 1) <= Math.max(CLOSE, 10 ** -digits);
}
