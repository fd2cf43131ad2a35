import type { Block } from '@core/protocol/document';
import type { Result } from '@core/protocol/result';
import { reportOf } from '@core/report/report-of';
import { number } from '@core/words/numbers';
import { describe, expect, it } from 'vitest';
import { loadCase, outside } from '../support/case';
import { resultOfCase, resultOfTable } from './results';
import { faultsOf, headingsOf, proseOf, tableOf, textsOf } from './walk';

const schools = resultOfCase('schools-between-per-size', 'between-per-size-restricted', {
  beside: ['constant', 'per-size'],
});
const latitude = resultOfCase('bcg-latitude', 'restricted', { beside: ['constant'] });
const known = resultOfCase('physics-known-se', 'scale-fixed');

const report = (result: Result) => reportOf({ result, edition: null });

describe('a report', () => {
  const few = 'a,n,y,x\np,10,1.2,1\nq,50,2.4,4\n';
  const everywhere: [string, () => Result][] = [
    ['a between part', () => schools],
    ['given errors with five rules', () => latitude],
    ['errors of fixed scale', () => known],
    ['errors with a freedom of their own', () => resultOfCase('physics-freedom', 'freedom-5')],
    ['a between variance of zero under Knapp-Hartung', () => resultOfCase('branches-tau-zero', 'restricted-kh')],
    ['a target of persons', () => resultOfCase('library-targets', 'persons')],
    ['no intercept', () => resultOfCase('library-no-intercept', 'per-size')],
    ['an exponent that is estimated', () => resultOfCase('library-size-power', 'size-power-full')],
    ['as many cells as coefficients', () => resultOfTable(few, { terms: [{ column: 'x' }] })],
    ['three cells and a mean', () => resultOfTable('a,n,y\np,10,1.2\nq,50,2.4\nr,90,1.9\n')],
  ];
  it.each(everywhere)('is plain data without a hole, under %s', (_, result) => {
    const document = report(result());
    expect(faultsOf(document)).toEqual([]);
    expect(textsOf(document).filter((text) => text !== text.trimEnd())).toEqual([]);
  });

  it('is the same each time', () => {
    expect(JSON.stringify(report(schools))).toBe(JSON.stringify(report(schools)));
  });

  it('leads with the answer and the statement, and ends its body with what averages cannot say', () => {
    const names = headingsOf(report(schools));
    expect(names[0]).toBe(schools.plan.title);
    expect(names[1]).toBe('The variance statement');
    const body = names.filter((name) => !name.startsWith('Appendix'));
    expect(body.at(-1)).toBe('What averages cannot say');
  });

  it('carries at most three cautions on page one, and every one in their section', () => {
    const cautions = (blocks: readonly Block[]) => blocks.filter(({ kind }) => kind === 'caution').length;
    for (const result of [schools, latitude, known]) {
      const { blocks } = report(result);
      const second = blocks.findIndex((block) => block.kind === 'heading' && block.text === 'The variance statement');
      const first = cautions(blocks.slice(0, second));
      expect(first).toBeLessThanOrEqual(3);
      expect(cautions(blocks) - first).toBe(result.cautions.length);
    }
  });

  it('prints the values of the outside reference in its table of coefficients', () => {
    const of = loadCase('physics-known-se'); // Weisberg, Applied Linear Regression; PRACTICE A
    const [intercept, slope] = tableOf(report(known), 'Coefficients, in written order').map((row) =>
      row.map(({ text }) => text),
    );
    expect(intercept?.slice(0, 4)).toEqual(['intercept', '148.47', '138.91 to 158.03', '4.88']);
    expect(slope?.slice(0, 5)).toEqual(['x', '530.8', '474.6 to 587.1', '28.7', 'normal']);
    expect(Number(slope?.[1])).toBeCloseTo(outside(of, 'scale-fixed', 'coefficient:x'), 1);
  });

  it('formats every number of a coefficient from the value that stands in the result', () => {
    for (const result of [schools, latitude, known])
      for (const [i, row] of tableOf(report(result), 'Coefficients, in written order').entries()) {
        const own = result.fit.coefficients[i];
        expect(row[1]?.value).toBe(own?.estimate);
        expect(row[3]?.value).toBe(own?.se);
        const decimals = row[1]?.text.split('.')[1]?.length ?? 0;
        expect(row[1]?.text).toBe(number(own?.estimate ?? null, { decimals }));
        expect(row[3]?.text).toBe(number(own?.se ?? null, { decimals }));
      }
  });

  it('tells a between variance by every rule with the outside values of the vaccine trials', () => {
    // van Houwelingen, Arends & Stijnen 2002 (PRACTICE B): restricted tau^2 .07634796, slope -.02910173 (.00719533)
    const rules = tableOf(report(latitude), /by each rule/);
    const restricted = rules.find(([name]) => name?.text === 'restricted likelihood');
    expect(restricted?.map(({ text }) => text).slice(0, 2)).toEqual(['restricted likelihood', '0.07635']);
    expect(restricted?.[4]?.text).toBe('−0.02910');
    expect(rules).toHaveLength(5);
  });

  it('leaves out the sections of the keys that the plan names, and says so', () => {
    const omit = ['evidence', 'beside', 'overturn', 'cells'];
    const left = report({ ...schools, plan: { ...schools.plan, report: { paper: 'Letter', omit } } });
    const names = headingsOf(left).join('\n');
    expect(names).not.toMatch(/Evidence|Other structures|price|overturn|Appendix: cells|every test/);
    expect(left.paper).toBe('Letter');
    expect(proseOf(left)).toContain(
      'The plan leaves out of this report what the result holds under “evidence”, “beside”, “overturn” and “cells”.',
    );
  });

  it('says which edition it is, who decided what, and how many structures the trail counts', () => {
    const head = '9f'.repeat(32);
    const document = reportOf({
      result: schools,
      edition: {
        number: 3,
        time: '2026-11-20T14:05:00Z',
        author: 'Ada Weiss',
        head,
        structuresTried: { count: 6 },
        decisions: [{ author: 'Ben Okoro', time: '2026-11-19T16:40:00Z', text: 'The between part stays.' }],
      },
    });
    const prose = proseOf(document);
    expect(prose).toContain('Edition 3, frozen 2026-11-20 14:05 UTC by Ada Weiss.');
    expect(prose).toContain(`Head of the trail: ${head}.`);
    expect(prose).toContain('Six structures were tried');
    expect(prose).toContain('Six variance structures were tried');
    expect(tableOf(document, /^Decisions/)[0]?.map(({ text }) => text)).toEqual([
      'The between part stays.',
      'Ben Okoro',
      '2026-11-19 16:40 UTC',
    ]);
    expect(document.author).toBe('Ada Weiss');
  });

  it('sets each note under its heading, one on page one below the title lines, and one on a section that is left out at the end of the record', () => {
    const time = '2026-03-01T09:30:00Z';
    const notes = [
      { place: 'page-one', text: 'For the board.', author: 'Ada', time },
      { place: 'influence', text: 'First line.\n\n Second line. ', author: null, time },
      { place: 'evidence', text: 'Kept for the appendix.', author: 'Ben', time },
    ];
    const plan = { ...schools.plan, report: { ...schools.plan.report, omit: ['evidence'] } };
    const { blocks } = reportOf({ result: { ...schools, plan }, edition: null, notes });
    const plainly = reportOf({ result: { ...schools, plan }, edition: null });
    const at = (text: string) => blocks.findIndex((block) => 'text' in block && block.text === text);
    const own = (from: number, to: number) =>
      blocks.slice(from, to).map((block) => ('text' in block ? block.text : ''));
    const page = at('Note: For the board.');
    expect(blocks.slice(0, page).map(({ kind }) => kind)).toEqual(['heading', 'paragraph']);
    expect(blocks[page]).toMatchObject({ margin: [{ about: 'Note', text: 'Ada, 2026-03-01 09:30 UTC' }] });
    const influence = at('Which cells carry the answer');
    expect(own(influence + 1, influence + 3)).toEqual(['Note: First line.', 'Second line.']);
    expect(blocks[influence + 1]).toMatchObject({ margin: [{ text: '2026-03-01 09:30 UTC' }] });
    const end = at('What averages cannot say');
    expect(own(end - 1, end)).toEqual([
      'Note on “Evidence about the structure”, which this report leaves out: Kept for the appendix.',
    ]);
    // Nothing else moves.
    const added = new Set([page, influence + 1, influence + 2, end - 1]);
    expect(blocks.filter((_, i) => !added.has(i))).toEqual(plainly.blocks);
  });

  it('withholds a p value on fewer than four degrees of freedom, and says so', () => {
    const result = resultOfTable('a,n,y\np,10,1.2\nq,50,2.4\nr,90,1.9\n');
    const document = report(result);
    expect(result.fit.coefficients[0]?.p).toBeTypeOf('number');
    expect(tableOf(document, 'Coefficients, in written order')[0]?.at(-1)?.text).toBe('withheld');
    expect(proseOf(document)).toContain('p withheld');
  });

  it('lists no more than forty cells, and says where all of them are', () => {
    const rows = Array.from({ length: 60 }, (_, g) => `c${g},${5 + g},${(g * 7) % 11}`);
    const document = report(resultOfTable(['a,n,y', ...rows].join('\n')));
    const table = document.blocks.find(
      (block) => block.kind === 'table' && /cells that move the fit most, of/.test(block.table.caption),
    );
    if (table?.kind !== 'table') throw new Error('no table of cells');
    expect(table.table.caption).toBe('The 40 cells that move the fit most, of 60');
    expect(table.table.rows).toHaveLength(40);
    expect(table.table.note).toContain('All 60 cells, with every quantity, are in cells.csv.');
  });
});
