import { afterAll, describe, expect, it } from 'vitest';
import { type CaseFit, loadCase, type ReferenceCase } from '../support/case';
import { disagreements } from './disagreements';
import { later } from './later';
import { caseNames, distance, foundIn, runCase, tolerance } from './whole-path';

interface Row {
  readonly id: string;
  readonly kind: string;
  values: number;
  worst: number;
  quantity: string;
}

const table: Row[] = [];

/** Quantities that a result does not hold, and the test that judges them. */
const elsewhere: Readonly<Record<string, string>> = { block_shift: 'test/evidence/correlated.test.ts' };

function due({ id, fits }: ReferenceCase): readonly CaseFit[] {
  const waiting = later[id] ?? [];
  return waiting === 'all' ? [] : fits.filter(({ fit }) => !waiting.includes(fit));
}

function isKnown(id: string, fit: string, quantity: string): boolean {
  return disagreements.some((known) => known.id === id && known.fit === fit && known.quantity === quantity);
}

describe('reference values, from the bytes of the case through every room', () => {
  for (const of of caseNames.map(loadCase)) {
    const fits = due(of);
    if (fits.length === 0) continue;
    const row: Row = { id: of.id, kind: of.kind, values: 0, worst: 0, quantity: '' };
    table.push(row);
    it.each(fits.map((fit) => ({ name: fit.fit, fit })))(
      `${of.id}, $name: every value agrees (${of.source})`,
      ({ fit }) => {
        const run = runCase(of, fit);
        if (!run.ok) throw new Error(JSON.stringify(run.problems));
        const own = of.expected.filter(
          ({ fit: name, quantity }) => name === fit.fit && !((quantity.split(':')[0] as string) in elsewhere),
        );
        expect(own.length).toBeGreaterThan(0);
        const wrong = own.flatMap((expected) => {
          const found = foundIn(run.value, expected.quantity);
          const off = found === undefined ? Number.POSITIVE_INFINITY : distance(found, expected);
          row.values++;
          if (off > row.worst) Object.assign(row, { worst: off, quantity: expected.quantity });
          const agrees = off <= tolerance(run.value, expected) || isKnown(of.id, fit.fit, expected.quantity);
          return agrees ? [] : [{ quantity: expected.quantity, outside: expected.value, found }];
        });
        expect(wrong).toEqual([]);
      },
    );
  }

  it('leave no disagreement without a derivation, and the list of those does not grow', () => {
    expect(disagreements).toHaveLength(0);
    for (const { derivation } of disagreements) expect(derivation.length).toBeGreaterThan(100);
  });

  it('wait for later versions only where the program refuses the fit by name, or the reference rests on such a fit', () => {
    for (const [id, waiting] of Object.entries(later)) {
      const fits = loadCase(id).fits.map(({ fit }) => fit);
      if (waiting !== 'all') expect(fits).toEqual(expect.arrayContaining([...waiting]));
      else expect(fits.length).toBeGreaterThan(0);
    }
  });
});

afterAll(() => {
  const lines = table.map(
    ({ id, kind, values, worst, quantity }) =>
      `${id.padEnd(28)}${kind.padEnd(20)}${String(values).padStart(6)}   ${worst.toExponential(1)}   ${quantity}`,
  );
  const count = table.reduce((sum, { values }) => sum + values, 0);
  console.log(
    [
      'case                        kind                values   worst relative disagreement, and where',
      ...lines,
      `${count} values in ${table.length} cases`,
    ].join('\n'),
  );
});
