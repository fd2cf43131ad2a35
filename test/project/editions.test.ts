import { createHash } from 'node:crypto';
import { checkProject, type Rebuild } from '@main/project/check-project';
import type { Project } from '@main/project/project';
import { describe, expect, it } from 'vitest';
import {
  bytes,
  codeOf,
  constant,
  freeze,
  newProject,
  perSize,
  planCalled,
  resultText,
  taken,
  unguarded,
} from './support';

const plan = planCalled('0');
const result = resultText({ plan, slope: 1.5 });

/** Two editions of one plan, closed. */
function frozen(): string {
  const { project, file, planId } = newProject();
  freeze(project, { planId, result, report: 'pages of 1' });
  freeze(project, { planId, result, report: 'pages of 2' });
  project.close();
  return file;
}

/** Makes every edition again as it was. */
const faithful: Rebuild = async (edition) => ({
  ok: true,
  value: { result: edition.result, report: async () => bytes(`pages of ${edition.number}`) },
});

const differing = (edition: number, what: string, found: string, expected: string) => ({
  ok: false,
  problems: [{ code: 'edition-differs', at: null, facts: { edition, what, found, expected } }],
});

describe('an edition', () => {
  it('keeps plan, inputs, result, report and the facts that the report prints, numbered from 1', () => {
    const { project, planId } = newProject();
    taken(project.decide({ author: 'Ada', text: 'Pilot area left out.' }));
    const fit = taken(project.keepFit({ planId, result }));
    const head = project.trailHead();
    const facts = project.nextEdition('Ada');
    expect(facts).toMatchObject({
      number: 1,
      author: 'Ada',
      head,
      project: 'care',
      decisions: [{ author: 'Ada', text: 'Pilot area left out.' }],
      structuresTried: { count: 1, before: 0, after: 1, ranges: [{ term: 'x', low: 1.5, high: 1.5 }] },
    });
    const after = taken(project.freezeEdition({ fit, facts, report: bytes('pages') }));
    expect(after).toBe(project.trailHead());
    expect(project.trail().at(-1)).toMatchObject({
      action: 'frozen',
      author: 'Ada',
      previous: head,
      facts: { edition: 1 },
    });
    const [edition] = project.editions();
    expect(edition).toMatchObject({
      number: 1,
      facts,
      plan: JSON.stringify(plan),
      result,
      inputs: [{ name: 'cells.csv' }],
    });
    expect(new TextDecoder().decode(edition?.report)).toBe('pages');
    expect(project.nextEdition('Ada')).toMatchObject({ number: 2, head: after });
  });

  it('is not frozen with facts that the trail has left behind', () => {
    const { project, planId } = newProject();
    const fit = taken(project.keepFit({ planId, result }));
    const facts = project.nextEdition('Ada');
    taken(project.decide({ author: 'Ada', text: 'One thing more.' }));
    expect(() => project.freezeEdition({ fit, facts, report: bytes('pages') })).toThrow('trail went on');
    expect(project.editions()).toEqual([]);
  });

  it('of the same result shares the fit that is kept once', () => {
    const { project, planId } = newProject();
    expect(taken(project.keepFit({ planId, result }))).toBe(taken(project.keepFit({ planId, result })));
    expect(project.trail('fit-kept')).toHaveLength(1);
  });
});

describe('the structures tried', () => {
  const tried = (project: Project) => project.structuresTried();

  it('count chosen and rival structures once each, written one way or another, with the range of each coefficient', () => {
    const { project, planId } = newProject();
    const fitted = (slope: number, beside: { variance: unknown; slope: number }[]) =>
      taken(project.keepFit({ planId, result: resultText({ plan, slope, beside }) }));
    fitted(1.5, [
      { variance: 'constant', slope: 2 },
      { variance: 'per-size', slope: 1.5 },
    ]);
    fitted(1.25, [{ variance: constant, slope: 1 }]);
    const between = { kind: 'between', correlation: null };
    const sampling = perSize.parts[0];
    fitted(1.1, [
      { variance: { parts: [sampling, between], fixed: { tau2: 1, phi: 2 } }, slope: 1.2 },
      { variance: { parts: [between, sampling], fixed: { phi: 2, tau2: 1 } }, slope: 1.2 },
    ]);
    expect(tried(project)).toEqual({ count: 3, before: 0, after: 3, ranges: [{ term: 'x', low: 1, high: 2 }] });
  });

  it('are told apart by whether the answer was in view, and stay counted when their change is undone', () => {
    const { project, planId } = newProject();
    taken(project.keepFit({ planId, result: resultText({ plan, slope: 1 }) }));
    taken(project.uncoverAnswer({ author: 'Ada' }));
    const other = planCalled('1', constant);
    taken(project.changePlan({ planId, action: 'variance', plan: other }));
    taken(
      project.keepFit({
        planId,
        result: resultText({ plan: other, slope: 2, beside: [{ variance: perSize, slope: 1 }] }),
      }),
    );
    taken(project.undo());
    expect(tried(project)).toEqual({ count: 2, before: 1, after: 1, ranges: [{ term: 'x', low: 1, high: 2 }] });
  });
});

describe('check', () => {
  it('passes a project whose every edition is made again to the last byte, and tells the head', async () => {
    const file = frozen();
    expect(await checkProject(file, faithful)).toMatchObject({
      ok: true,
      value: {
        entries: 5,
        head: expect.stringMatching(/^[0-9a-f]{64}$/),
        editions: [
          { number: 1, how: 'bytes' },
          { number: 2, how: 'bytes' },
        ],
      },
    });
  });

  it('hands an edition’s own plan and inputs to the one who makes it again', async () => {
    const seen: unknown[] = [];
    await checkProject(frozen(), async (edition, bytesOf) => {
      const input = bytesOf('cells.csv') as Uint8Array;
      seen.push(edition.plan, new TextDecoder().decode(input), bytesOf('other.csv'));
      return faithful(edition, bytesOf);
    });
    expect(seen.slice(0, 3)).toEqual([JSON.stringify(plan), 'x,y,n\n1,2,3\n', null]);
  });

  it('names the first number that comes out another', async () => {
    const moved: Rebuild = async (edition, bytesOf) =>
      edition.number === 2
        ? {
            ok: true,
            value: { result: resultText({ plan, slope: 1.5000000000000002 }), report: async () => bytes('') },
          }
        : faithful(edition, bytesOf);
    expect(await checkProject(frozen(), moved)).toEqual(
      differing(2, '/fit/coefficients/0/estimate', '1.5000000000000002', '1.5'),
    );
  });

  it('names a report that prints other bytes, by both hashes', async () => {
    const reprinted: Rebuild = async (edition) => ({
      ok: true,
      value: { result: edition.result, report: async () => bytes('pages of 1') },
    });
    const [found, expected] = ['pages of 1', 'pages of 2'].map((text) =>
      createHash('sha256').update(text).digest('hex'),
    );
    expect(await checkProject(frozen(), reprinted)).toEqual(differing(2, 'report.pdf', `${found}`, `${expected}`));
  });

  it('compares numbers alone, within 1e-9 of themselves, where another version made the edition', async () => {
    const later =
      (slope: number): Rebuild =>
      async () => ({
        ok: true,
        value: {
          result: resultText({ plan, slope, version: '0.2.0' }),
          report: () => Promise.reject(new Error('not to be printed')),
        },
      });
    expect(await checkProject(frozen(), later(1.5 * (1 + 9e-10)))).toMatchObject({
      ok: true,
      value: { editions: [{ how: 'numbers' }, { how: 'numbers' }] },
    });
    expect(codeOf(await checkProject(frozen(), later(1.5 * (1 + 2e-9))))).toBe('edition-differs');
  });

  it.each([
    ['fit', `UPDATE fit SET result = replace(result, '1.5', '1.6')`, 'result.json'],
    ['edition', "UPDATE edition SET report = x'00' WHERE number = 2", 'report.pdf'],
    ['edition', `UPDATE edition SET facts = replace(facts, 'Ada', 'Eve') WHERE number = 2`, 'edition.json'],
    ['plan_state', `UPDATE plan_state SET plan = json_set(plan, '$.title', 'x')`, 'plan.json'],
    ['input', "UPDATE input SET bytes = x'00'", 'cells.csv'],
    ['state_input', "UPDATE state_input SET name = 'other.csv'", 'data.files'],
  ])('finds what was altered in %s: %s', async (table, statement, what) => {
    const file = frozen();
    unguarded(file, table, statement);
    expect(await checkProject(file, faithful)).toMatchObject({
      ok: false,
      problems: expect.arrayContaining([
        { code: 'edition-differs', at: null, facts: expect.objectContaining({ edition: 2, what }) },
      ]),
    });
  });

  it('finds an input altered that no edition uses, at the entry that recorded it', async () => {
    const { project, file, planId } = newProject();
    const inputs = [{ name: 'cells.csv', sha256: taken(project.keepInput(bytes('later'))) }];
    taken(project.changePlan({ planId, action: 'data', plan, inputs }));
    project.close();
    unguarded(file, 'input', "UPDATE input SET bytes = x'00' WHERE bytes = CAST('later' AS BLOB)");
    expect(await checkProject(file, faithful)).toEqual({
      ok: false,
      problems: [{ code: 'trail-broken', at: null, facts: { entry: 3, finding: 'input' } }],
    });
  });

  it('tells that an edition cannot be made again, and why', async () => {
    const refused: Rebuild = async () => ({
      ok: false,
      problems: [{ code: 'not-available', at: '/variance', facts: { what: 'matrix' } }],
    });
    const outcome = await checkProject(frozen(), refused);
    expect(outcome.ok ? [] : outcome.problems.map(({ code }) => code)).toEqual([
      'edition-differs',
      'not-available',
      'edition-differs',
      'not-available',
    ]);
  });

  it('stops at once when it is cancelled', async () => {
    const cancelled: Rebuild = async () => ({ ok: false, problems: [{ code: 'cancelled', at: null, facts: {} }] });
    expect(await checkProject(frozen(), cancelled)).toMatchObject({ problems: [{ code: 'cancelled' }] });
  });

  it('passes a project without editions by its trail alone', async () => {
    const { project, file } = newProject();
    project.close();
    expect(await checkProject(file, faithful)).toMatchObject({ ok: true, value: { entries: 2, editions: [] } });
  });
});
