import { copyFileSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { unpackLook } from '@core/protocol/data-look';
import { unsaidRead } from '@core/protocol/draft';
import { LARGEST_READ, LARGEST_SENT } from '@core/protocol/limits';
import { sentence } from '@core/words/problems';
import { sha256Of } from '@main/project/sha256';
import { describe, expect, it } from 'vitest';
import {
  codesOf,
  demoPlan,
  firstProblem,
  folder,
  openWindow,
  smallCells,
  smallPlan,
  take,
  taken,
  withProject,
} from './window';

const bytesOf = (text: string) => new TextEncoder().encode(text);

describe('a file that is taken in', () => {
  it('by the chooser or by drop and paste is shown with what was found out of it, and nothing else of it is kept', async () => {
    const window = openWindow();
    const file = join(folder(), 'care.csv');
    const text = 'parish;mean;n\nElm;1,5;010\nOak;c;020\nAsh;2,75;030\n';
    writeFileSync(file, text);
    window.choose(file);
    const chosen = taken(await window.ask('data.choose', {}));
    expect(chosen).toEqual({
      name: 'care.csv',
      sha256: sha256Of(text),
      size: text.length,
      read: unsaidRead,
      found: { encoding: 'utf-8', delimiter: ';' },
      rows: 3,
      problems: [],
      columns: [
        {
          name: 'parish',
          type: 'text',
          reason: 'distinct-texts',
          distinct: 3,
          decimal: ',',
          group: null,
          readsBothWays: false,
          tokens: [],
          texts: ['Elm', 'Oak', 'Ash'],
        },
        {
          name: 'mean',
          type: 'number',
          reason: 'numbers-and-tokens',
          distinct: 2,
          decimal: ',',
          group: null,
          readsBothWays: false,
          tokens: [{ token: 'c', rows: 1, status: 'suppressed-confidential' }],
          texts: ['1,5', 'c', '2,75'],
        },
        {
          name: 'n',
          type: 'category',
          reason: 'leading-zeros',
          distinct: 3,
          decimal: ',',
          group: null,
          readsBothWays: false,
          tokens: [],
          texts: ['010', '020', '030'],
        },
      ],
    });
    expect(taken(await window.ask('data.take', { name: 'C:\\x\\care.csv', bytes: bytesOf(text) }))).toEqual(chosen);
    expect(taken(await window.ask('data.choose', {}))).toBeNull();
  });

  it('can be read in another way, as long as that way makes sense', async () => {
    const window = openWindow();
    const input = await take(window, 'a.csv', 'a;b\n1.234;2\n5.678;3\n');
    const preview = (read: unknown) => window.ask('data.preview', { ...input, read });
    expect(taken(await preview({})).columns[0]).toMatchObject({ readsBothWays: true, decimal: null });
    const settled = taken(await preview({ decimal: ',', group: '.' }));
    expect(settled).toMatchObject({
      read: { ...unsaidRead, decimal: ',', group: '.' },
      columns: [{ decimal: ',', group: '.' }, {}],
    });
    expect(taken(await preview({ delimiter: '|' })).columns.map(({ name }) => name)).toEqual(['a;b']);
    expect(firstProblem(await preview({ decimal: 'x' }))).toMatchObject({ code: 'unknown-kind', at: '/read/decimal' });
    expect(firstProblem(await preview({ encodings: 'utf-8' }))).toMatchObject({ code: 'unknown-key' });
    expect(codesOf(await preview(3))).toEqual(['wrong-type']);
    const gone = taken(await window.ask('data.preview', { name: 'b.csv', sha256: 'b'.repeat(64), read: {} }));
    expect(gone.problems).toMatchObject([{ code: 'file-not-found', facts: { file: 'b.csv' } }]);
  });

  it('shows no more than the first hundred texts of a column', async () => {
    const window = openWindow();
    const text = `a,b\n${Array.from({ length: 5000 }, (_, i) => `${i},x`).join('\n')}\n`;
    const { rows, columns } = taken(await window.ask('data.take', { name: 'a.csv', bytes: bytesOf(text) }));
    expect([rows, columns[0]?.texts.length, columns[0]?.distinct]).toEqual([5000, 100, 5000]);
  });

  it.each<[string, Uint8Array<ArrayBuffer>, string]>([
    ['nothing', new Uint8Array(0), 'empty-file'],
    ['spaces', bytesOf(' \n\n'), 'empty-file'],
    ['a picture', Uint8Array.from({ length: 5000 }, (_, i) => (i * 7919) % 256), 'undecodable'],
    ['zeros', new Uint8Array(5000), 'undecodable'],
    ['prose', bytesOf(`${'It is a truth, universally acknowledged.\n'.repeat(50)}a,b,c,d\n`), 'malformed-row'],
    ['an open quote', bytesOf('a,b\n1,"2\n3,4\n'), 'malformed-row'],
  ])('that is no table (%s) is told by what is wrong with it', async (_, bytes, code) => {
    const window = openWindow();
    const preview = taken(await window.ask('data.take', { name: 'odd.csv', bytes }));
    expect([preview.found, preview.rows, preview.columns]).toEqual([null, 0, []]);
    expect(preview.problems.map((one) => one.code)).toEqual([code]);
    expect(preview.problems.map(sentence).join()).toContain('odd.csv');
  });

  it('of 200 MB is refused by its size before anything is made of it, dropped or chosen', async () => {
    const window = openWindow();
    const bytes = new Uint8Array(200_000_000).fill(0x61);
    const before = process.memoryUsage().rss;
    const dropped = firstProblem(await window.ask('data.take', { name: 'big.txt', bytes }));
    expect(dropped).toEqual({
      code: 'file-too-large',
      at: null,
      facts: { file: 'big.txt', size: 200_000_000, limit: LARGEST_SENT },
    });
    expect(dropped && sentence(dropped)).toBe(
      '“big.txt” has 200 megabytes, and files up to 32 megabytes are read here. Keep the rows and columns that the cells need.',
    );
    const file = join(folder(), 'big.txt');
    writeFileSync(file, bytes);
    window.choose(file);
    expect(firstProblem(await window.ask('data.choose', {}))?.facts).toEqual({
      ...dropped?.facts,
      limit: LARGEST_READ,
    });
    expect(process.memoryUsage().rss - before).toBeLessThan(100_000_000);
  });

  it('that is too large to be sent is read from its place where it was chosen', async () => {
    const window = openWindow();
    const line = `1,${'x'.repeat(4000)}\n`;
    const bytes = bytesOf(`a,b\n${line.repeat(Math.ceil(LARGEST_SENT / line.length))}`);
    expect(codesOf(await window.ask('data.take', { name: 'long.csv', bytes }))).toEqual(['file-too-large']);
    const file = join(folder(), 'long.csv');
    writeFileSync(file, bytes);
    window.choose(file);
    const preview = taken(await window.ask('data.choose', {}));
    expect([preview?.name, preview?.size, preview?.columns.length]).toEqual(['long.csv', bytes.length, 2]);
  });

  it.each<[string, string, string]>([
    [
      'rows',
      '1\n'.repeat(2_000_002),
      '“many.csv” has some 2 000 000 rows, and tables up to 2 000 000 rows are read here.',
    ],
    [
      'fields',
      `${'1;'.repeat(21_000)}\n`.repeat(1000),
      '“many.csv” has some 21 000 000 fields, and tables up to 20 000 000',
    ],
  ])('of more %s than memory holds is refused before it is read, and the program goes on', async (_, text, says) => {
    const window = openWindow();
    // Larger than what is sent, where need be: then it is chosen.
    const file = join(folder(), 'many.csv');
    writeFileSync(file, text);
    window.choose(file);
    const problems = taken(await window.ask('data.choose', {}))?.problems ?? [];
    expect(problems.map(({ code }) => code)).toEqual(['table-too-large']);
    expect(problems.map(sentence).join().replaceAll('\u202f', ' ')).toContain(says);
    expect(taken(await window.ask('data.take', { name: 'a.csv', bytes: bytesOf(smallCells) })).rows).toBe(6);
  });

  it('that is a project is not read as a table: one that was chosen can be opened, one that was dropped is to be chosen', async () => {
    const window = openWindow();
    const { file } = await withProject(window);
    taken(await window.ask('project.close', {}));
    const other = join(folder(), 'table.csv'); // whatever it is called
    copyFileSync(file, other);
    const bytes = Uint8Array.from(readFileSync(file));
    expect(firstProblem(await window.ask('data.take', { name: 'care.steelyard', bytes }))).toEqual({
      code: 'is-a-project',
      at: null,
      facts: { file: 'care.steelyard', offered: false },
    });
    expect(codesOf(await window.ask('project.open', { file: other }))).toEqual(['no-project']);
    window.choose(other);
    expect(firstProblem(await window.ask('data.choose', {}))).toEqual({
      code: 'is-a-project',
      at: null,
      facts: { file: other, offered: true },
    });
    expect(taken(await window.ask('project.open', { file: other }))?.file).toBe(other);
  });

  it('that is not there or is a folder is told so', async () => {
    const window = openWindow();
    window.choose(join(folder(), 'gone.csv'));
    expect(codesOf(await window.ask('data.choose', {}))).toEqual(['file-not-found']);
    window.choose(folder());
    expect(codesOf(await window.ask('data.choose', {}))).toEqual(['file-not-found']);
  });
});

describe('a look at the cells', () => {
  it('lists every data row in order, with its label, what its roles say and why it is left out', async () => {
    const window = openWindow();
    const inputs = [await take(window, 'cells.csv', smallCells.replace('2.9', '..'))];
    const plan = smallPlan({
      data: {
        file: 'cells.csv',
        read: { statuses: { '..': 'not-collected' } },
        omit: [{ column: 'parish', is: ['Oak'], because: 'another survey' }],
      },
    });
    const look = unpackLook(taken(await window.ask('data.look', { plan, inputs })));
    expect(look).toMatchObject({ columns: ['parish', 'y', 'n', 'x'], used: 3, unmatched: [] });
    expect(look.files).toEqual(inputs);
    expect(
      look.rows.map(({ row, label, key, outcome, size, error, reason }) => [
        row,
        label,
        key,
        outcome,
        size,
        error,
        reason?.code,
      ]),
    ).toEqual([
      [1, 'Elm', ['Elm'], 1.5, 10, null, undefined],
      [2, 'Oak', ['Oak'], 2.5, 20, null, 'omit-rule'],
      [3, 'Ash', ['Ash'], null, 30, null, 'not-collected'],
      [4, 'Fir', ['Fir'], 4.4, 40, null, undefined],
      [5, 'Yew', ['Yew'], 5.2, 50, null, undefined],
      [6, 'Box', ['Box'], 5.9, 0, null, 'not-above-zero'],
    ]);
    expect(look.rows[1]?.reason).toEqual({ code: 'omit-rule', column: 'parish', text: 'another survey' });
  });

  it('of the demo agrees with the fit on which cells are used and why others are not', async () => {
    const window = openWindow();
    await withProject(window);
    const demo = await demoPlan(window);
    const look = unpackLook(taken(await window.ask('data.look', demo)));
    const { job } = taken(await window.ask('fit.try', demo));
    const { data, cells } = await window.resultOf(job);
    expect(look.rows).toHaveLength(data.rows);
    expect(
      look.rows.filter(({ reason }) => reason === null).map(({ label, outcome, size }) => [label, outcome, size]),
    ).toEqual(cells.map(({ label, observed, size }) => [label, observed, size]));
    expect(look.rows.flatMap(({ row, label, reason }) => (reason === null ? [] : [{ row, label, reason }]))).toEqual(
      data.omitted,
    );
  });

  it('tells every fault of form, or of data, with its place', async () => {
    const window = openWindow();
    const inputs = [await take(window, 'cells.csv', smallCells)];
    const faulty = smallPlan({ roles: { outcome: 'parish', size: 'm' }, terms: [{ column: 'z' }] });
    const refused = await window.ask('data.look', { plan: faulty, inputs });
    if (refused.ok) throw new Error('looked');
    expect(refused.problems.map(({ code, at }) => [code, at]).sort()).toEqual([
      ['not-a-number', '/roles/outcome'],
      ['unknown-column', '/roles/size'],
      ['unknown-column', '/terms/0/column'],
    ]);
    expect(codesOf(await window.ask('data.look', { plan: { format: 'x' }, inputs }))).toEqual(['wrong-format']);
    expect(codesOf(await window.ask('data.look', { plan: smallPlan(), inputs: [] }))).toEqual(['file-not-found']);
  });

  it.each<[string, unknown]>([
    ['undefined', undefined],
    [
      'a circle',
      (() => {
        const a: Record<string, unknown> = {};
        a['a'] = a;
        return a;
      })(),
    ],
    ['a big integer', { format: 3n }],
  ])('of what is no JSON (%s) is refused', async (_, plan) => {
    expect(codesOf(await openWindow().askAnything('data.look', { plan, inputs: [] }))[0]).toMatch(
      /not-json|wrong-type/,
    );
  });
});

describe('other data in the place of a plan’s', () => {
  it('are compared before anything is changed: added, lost and changed cells, and how many are used', async () => {
    const window = openWindow();
    await withProject(window);
    const inputs = [await take(window, 'cells.csv', smallCells)];
    const { planId, job } = taken(await window.ask('plan.add', { name: 'Main', plan: smallPlan(), inputs }));
    await window.doneOf(job);
    const next = await take(
      window,
      'cells.csv',
      smallCells.replace('Oak', 'Ivy').replace('4.4', '4.5').replace('5.9,0', '5.9,60'),
    );
    expect(taken(await window.ask('data.compare', { planId, inputs: [next] }))).toEqual({
      added: ['Ivy'],
      lost: ['Oak'],
      changed: [
        { label: 'Fir', column: 'y', before: '4.4', after: '4.5' },
        { label: 'Box', column: 'n', before: '0', after: '60' },
      ],
      used: { before: 5, after: 6 },
    });
    expect(taken(await window.ask('project.look', {}))?.plans[0]?.inputs).toEqual(inputs);
    const changed = taken(
      await window.ask('plan.change', { planId, action: 'data', plan: smallPlan(), inputs: [next] }),
    );
    expect(changed.project.plans[0]?.inputs).toEqual([next]);
    expect((await window.resultOf(changed.job)).data.used).toBe(6);
    expect(codesOf(await window.ask('data.compare', { planId: 7, inputs: [] }))).toEqual(['unknown-plan']);
    const broken = await take(window, 'cells.csv', 'parish,y\nElm,x\n');
    expect(codesOf(await window.ask('data.compare', { planId, inputs: [broken] }))).toContain('unknown-column');
    const missing = { name: 'cells.csv', sha256: 'c'.repeat(64) };
    expect(codesOf(await window.ask('data.compare', { planId, inputs: [missing] }))).toEqual(['file-not-found']);
  });
});

it('a script in a label stays the text that it is', async () => {
  const window = openWindow();
  const script = '<img src=x onerror=alert(1)>';
  const inputs = [await take(window, 'cells.csv', smallCells.replace('Elm', script))];
  expect(unpackLook(taken(await window.ask('data.look', { plan: smallPlan(), inputs }))).rows[0]?.label).toBe(script);
});
