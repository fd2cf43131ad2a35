import { cautionSentence } from '@core/words/cautions';
import { runText } from '@main/engine/run-plan';
import { describe, expect, it } from 'vitest';

function cautions(plan: object, rows: readonly string[]): { code: string; text: string }[] {
  const run = runText({
    text: JSON.stringify({ format: 'steelyard-plan/1', terms: [{ column: 'x' }], ...plan }),
    fetch: () => ({ ok: true, value: new TextEncoder().encode(rows.join('\n')) }),
  });
  if (!run.ok) throw new Error(JSON.stringify(run.problems));
  return run.value.result.cautions.map((caution) => ({ code: caution.code, text: cautionSentence(caution) }));
}

describe('values that give cause to say something', () => {
  it('are coefficients of variation above 1: percentages, most likely', () => {
    const rows = ['y,cv,x', '10,0.1,1', '12,5,2', '14,0.1,3', '19,7.5,4', '18,0.1,5'];
    const found = cautions(
      {
        data: { file: 'c.csv' },
        roles: { outcome: 'y', error: 'cv', errorKind: 'cv' },
        variance: { parts: [{ kind: 'given', scale: 'free' }] },
      },
      rows,
    );
    expect(found.find(({ code }) => code === 'variation-above-one')?.text).toContain(
      'wo cells have coefficients of variation above 1 in cv, up to 7.5',
    );
  });

  it('are numbers that round to zero', () => {
    const rows = ['y,n,x', '10,5,1', '~0,6,2', '14,7,3', '19,8,4', '18,9,5'];
    const found = cautions(
      {
        data: { file: 'c.csv', read: { statuses: { '~0': 'rounds-to-zero' } } },
        roles: { outcome: 'y', size: 'n' },
        variance: { parts: [{ kind: 'per-size' }] },
      },
      rows,
    );
    expect(found.find(({ code }) => code === 'values-marked')?.text).toContain(
      'One value of y is marked by the source as rounding to zero',
    );
  });
});
