import { withCellNames } from '@core/figures/screen-names';
import { fittedFigure, normalFigure, weightsFigure } from '@core/figures/screen-plots';
import { squaredResiduals } from '@core/figures/squared-residuals';
import { normalUpper } from '@core/numbers/normal';
import type { Figure } from '@core/protocol/figure';
import type { Result } from '@core/protocol/result';
import { differenceText, likelihoodDifference } from '@core/words/screen-candidates';
import { partMath } from '@core/words/screen-equations';
import { movedSentence, movedText, plansNote } from '@core/words/screen-fit';
import {
  candidatesTable,
  coefficientsTable,
  evidenceTable,
  goodnessTable,
  influenceTable,
  overturnTable,
  plansTable,
  priceTable,
  robustTable,
  squareTable,
} from '@core/words/screen-fit-tables';
import { fromFolder } from '@main/engine/inputs';
import { runPlan, runText } from '@main/engine/run-plan';
import { beforeAll, describe, expect, it } from 'vitest';

let result: Result;
let other: Result;

beforeAll(async () => {
  const run = await runPlan({ planFile: 'resources/demo/plan.json' });
  if (!run.ok) throw new Error('the demo does not run');
  result = run.value.result;
  const { plan } = run.value;
  const text = JSON.stringify({
    ...plan,
    terms: plan.terms.slice(0, 1),
    questions: [],
    beside: [],
    data: { ...plan.data, omit: [{ column: 'parish', is: ['Brackwater'], because: 'a test' }] },
  });
  const changed = runText({ text, fetch: fromFolder('resources/demo') });
  if (!changed.ok) throw new Error(JSON.stringify(changed.problems));
  other = changed.value.result;
});

/** A text as a number, the other way round than the formatter goes. */
function back(text: string): number {
  return Number(text.replaceAll('\u2212', '-').replaceAll('\u202f', '').replace('%', '').replace(/^\+/, ''));
}

describe('tables of the fit screen', () => {
  it('write every number so that it reads back to the value it stands for, within half of its last digit', () => {
    const tables = [
      coefficientsTable(result, null),
      candidatesTable(result, null),
      squareTable(result, 'places_per_1000'),
      priceTable(result, 'places_per_1000'),
      influenceTable(result, 'places_per_1000', 56),
      robustTable(result),
      overturnTable(result, 'places_per_1000', 100),
      goodnessTable(result),
    ];
    let checked = 0;
    for (const { head, rows, caption } of tables)
      for (const row of rows) {
        expect(row, caption).toHaveLength(head.length);
        for (const { value, text } of row) {
          expect(text, caption).not.toMatch(/NaN|undefined|null|Infinity/);
          if (typeof value !== 'number' || text.startsWith('<') || text.startsWith('>')) continue;
          const shown = back(text);
          const decimals = text.replace(/\u202f?%/, '').split('.')[1]?.length ?? 0;
          const meant = text.endsWith('%') ? 100 * value : value;
          expect(Math.abs(shown - meant), `${caption}: ${text} for ${value}`).toBeLessThanOrEqual(
            0.5000001 * 10 ** -decimals,
          );
          checked++;
        }
      }
    expect(checked).toBeGreaterThan(400);
  });

  it('hold one row a test, a reading in each', () => {
    const { rows } = evidenceTable(result.evidence);
    expect(rows).toHaveLength(result.evidence.length);
    for (const [, , reading] of rows) expect(reading?.text).not.toBe('');
  });

  it('leave coefficients out of the candidates where the answer is covered', () => {
    const open = candidatesTable(result, 'places_per_1000');
    const covered = candidatesTable(result, null);
    expect(open.head.length - covered.head.length).toBe(1);
    expect(JSON.stringify(covered)).not.toContain('places_per_1000');
  });
});

describe('candidates', () => {
  it('are compared by the method’s own likelihood, told apart from 2 on', () => {
    const [constant] = result.beside;
    if (constant === undefined) throw new Error('the demo has rivals');
    expect(likelihoodDifference(result, constant)).toBeCloseTo(
      (constant.restrictedLogLikelihood as number) - (result.fit.restrictedLogLikelihood as number),
      12,
    );
    expect(differenceText(-3.246)).toEqual({ shown: '\u22123.25', remark: null });
    expect(differenceText(1.2)).toEqual({ shown: '+1.20', remark: 'not distinguishable' });
    expect(differenceText(0).shown).toBe('0.00');
    expect(differenceText(null).remark).toBe('no likelihood');
  });
});

describe('what moved', () => {
  it('is told for terms that moved, came in and went out, and for cells', () => {
    expect(movedText(null, result.fit.coefficients[1] as never)).toBe('');
    expect(movedText(result, result.fit.coefficients[1] as never)).toBe('');
    expect(movedSentence(result, result)).toBe('Since the last fit nothing moved.');
    const told = movedSentence(result, other) ?? '';
    expect(told).toMatch(/places_per_1000 moved/);
    expect(told).toMatch(/distance_km and older_percent went out/);
    expect(told).toMatch(/3 cells fewer are used/);
    expect(movedSentence(other, result)).toMatch(/distance_km and older_percent came in and 3 cells more are used/);
  });

  it('is told apart where intervals alone changed', () => {
    const wider: Result = {
      ...result,
      fit: { ...result.fit, coefficients: result.fit.coefficients.map((one) => ({ ...one, low: (one.low ?? 0) - 1 })) },
    };
    expect(movedSentence(result, wider)).toBe('Since the last fit no estimate moved, but intervals did.');
  });
});

describe('plans beside each other', () => {
  it('have one row a term of any of them, and a note of their structures and differing cells', () => {
    const plans = [
      { name: 'Whole', result },
      { name: 'Part', result: other },
    ];
    const { rows } = plansTable(plans);
    expect(rows.map(([name]) => name?.text)).toEqual([
      ...result.fit.coefficients.map(({ term }) => term),
      'cells used',
      'structure',
    ]);
    expect(rows.find(([name]) => name?.text === 'distance_km')?.[2]?.text).toBe('');
    expect(plansNote(plans)).toContain('“Part” lacks 3 cells of “Whole”');
    expect(plansNote([{ name: 'Whole', result }])).toBeNull();
  });
});

describe('figures that only the screens draw', () => {
  const finite = (figure: Figure): void => {
    expect(JSON.stringify(figure)).not.toMatch(/null,null|NaN|Infinity/);
    expect(figure.data.rows.length).toBeGreaterThan(0);
  };

  it('hold finite numbers, and a table with a row a cell', () => {
    for (const figure of [
      weightsFigure(result),
      fittedFigure(result, { raw: true }),
      fittedFigure(result, { raw: false }),
      normalFigure(result),
    ]) {
      if (figure === null) throw new Error('the demo can be drawn');
      finite(figure);
      expect(figure.data.rows).toHaveLength(result.cells.length);
    }
  });

  it('set weights against their mean, and are not drawn where sizes are lacking', () => {
    const rows = weightsFigure(result)?.data.rows ?? [];
    const own = rows.map((row) => row[2]?.value as number);
    expect(own.reduce((sum, w) => sum + w, 0) / own.length).toBeCloseTo(1, 12);
    const sizeless = { ...result, cells: result.cells.map((cell) => ({ ...cell, size: null, effectiveSize: null })) };
    expect(weightsFigure(sizeless)).toBeNull();
  });

  it('set each residual where its rank stands in a normal distribution, by Blom’s positions', () => {
    const rows = normalFigure(result)?.data.rows ?? [];
    const count = rows.length;
    for (const [i, row] of rows.entries())
      expect(normalUpper(-(row[1]?.value as number))).toBeCloseTo((i + 0.625) / (count + 0.25), 12);
    expect(rows.map((row) => row[2]?.value)).toEqual(
      result.cells.map(({ whitened }) => whitened).sort((a, b) => a - b),
    );
  });

  it('carry the label of its cell on every point that stands for one', () => {
    const figure = squaredResiduals(result);
    if (figure === null) throw new Error('the demo has residuals');
    const labels = new Set(result.cells.map(({ label }) => label));
    const named = withCellNames(figure, labels);
    const names = named.option.series.flatMap(({ data }) =>
      data.flatMap((point) => ('value' in point && point.name !== undefined ? [point.name] : [])),
    );
    expect(new Set(names).size).toBeGreaterThan(0.9 * labels.size);
    for (const name of names) expect(labels).toContain(name);
    expect(withCellNames(figure, new Set())).toBe(figure);
  });
});

describe('equations', () => {
  it('stand for every kind of part', () => {
    const roles = result.plan.roles;
    const perSize = JSON.stringify(partMath({ kind: 'per-size', correlation: null }, { roles }));
    expect(perSize).toContain('mfrac');
    expect(JSON.stringify(partMath({ kind: 'shared', by: ['region'] }, { roles }))).toContain('region');
    expect(
      JSON.stringify(partMath({ kind: 'between', correlation: { kind: 'serial', by: [], order: 'year' } }, { roles })),
    ).toContain('(serial)');
  });
});
