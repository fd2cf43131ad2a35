import type { Plan } from '@core/protocol/plan';
import { expect, test } from 'vitest';
import { isEvidenceQuantity, valueOf as quantityOf } from '../reference/quantities-evidence';
import { isDiagonal, loadCase } from '../support/case';
import { evidenceFor } from './fitted-case';

const cases = [
  'library-structure-tests',
  'stopping-breusch-pagan',
  'library-panel-dependence',
  'bcg-mean',
  'bcg-latitude',
  'schools-between-given',
  'schools-between-per-size',
  'library-between-per-size',
  'branches-tau-zero',
  'physics-known-se',
];

const fits = cases.flatMap((id) => {
  const of = loadCase(id);
  return of.fits
    .filter(isDiagonal)
    .map(({ fit }) => ({
      id,
      fit,
      expected: of.expected.filter((e) => e.fit === fit && isEvidenceQuantity(e.quantity)),
    }))
    .filter(({ expected }) => expected.length > 0);
});

// Reference libraries and 50-digit second routes; see each case's note and test/reference/README.
test.each(fits)('the structure tests of $id, $fit are the outside values', ({ id, fit, expected }) => {
  const evidence = evidenceFor(id, fit, withOrder(id, fit));
  for (const { quantity, value } of expected) {
    const ours = quantityOf(quantity, evidence);
    const tolerance = /(:|_)p$|^lr_p/.test(quantity) ? 1e-7 : 1e-10;
    expect(ours, `${quantity}: ${ours} for ${value}`).toSatisfy((found: unknown) => agrees(found, value, tolerance));
  }
});

function agrees(found: unknown, value: number | null, tolerance: number): boolean {
  if (value === null) return found === null;
  if (typeof found !== 'number') return false;
  return Math.abs(found - value) <= tolerance * Math.max(Math.abs(value), value === 0 ? 1 : 0);
}

/** Orders reach a plan through a derived lag that no term uses. */
function withOrder(id: string, name: string): (plan: Plan) => Plan {
  const found = loadCase(id).fits.find(({ fit }) => fit === name);
  const order = found?.spec.order as { by: string[]; order: string; of: string } | undefined;
  if (!order) return (plan) => plan;
  const lag = { name: 'before', as: 'lag' as const, of: order.of, by: order.by, order: order.order, steps: 1 };
  return (plan) => ({ ...plan, data: { ...plan.data, derive: [lag] } });
}
