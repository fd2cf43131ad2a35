import { describe, expect, it } from 'vitest';
import { cells, prepare, problems } from './support';

const statuses = {
  c: 'suppressed-confidential',
  '..': 'not-collected',
  '<5': 'interval',
  '1-9': 'interval',
  z: 'true-zero',
  r: 'rounds-to-zero',
  p: 'provisional',
  na: 'not-applicable',
};
const labelled = { label: ['place'], outcome: 'y', size: 'n' };

/** Rows left out, as "row code column text". */
function left(parts: object, text: string): string[] {
  return cells(parts, text).data.omitted.map(
    ({ row, reason }) => `${row} ${reason.code} ${reason.column} ${reason.text}`,
  );
}

describe('inclusion', () => {
  const data = { file: 'cells.csv', read: { statuses, missing: { y: ['-9', 'NA'] } } };

  it('gives each row left out its one reason, with the text as it stands', () => {
    const text =
      'place,y,n,x\nNA,1,5,1\nb,c,5,1\nc,..,0,1\nd,<5,5,1\ne,-9,5,1\nf,-9.0,5,1\ng,,5,1\nh,2,0,1\ni,2,-3,1\nj,2, ,1\nk,2,5,na\nl,NA,5,1\n';
    expect(left({ data, roles: labelled, terms: [{ column: 'x' }] }, text)).toEqual([
      '2 suppressed-confidential y c',
      '3 not-collected y ..',
      '4 interval y <5',
      '5 missing y -9',
      '7 blank y ',
      '8 not-above-zero n 0',
      '9 not-above-zero n -3',
      '10 blank n  ',
      '11 not-applicable x na',
      '12 missing y NA',
    ]);
    const { labels, outcome, rows } = cells({ data, roles: labelled, terms: [{ column: 'x' }] }, text);
    expect(labels).toEqual(['NA', 'f']);
    expect([...outcome.high]).toEqual([1, -9]);
    expect(rows).toEqual([1, 6]);
  });

  it('takes a true zero and a value that rounds to zero as 0, and keeps a number with a status after it', () => {
    const used = cells({ data, roles: labelled }, 'place,y,n\na,z,5\nb,r,5\nc,2.5 p,5\nd,2.5p,5\n');
    expect([...used.outcome.high]).toEqual([0, 0, 2.5, 2.5]);
    expect(used.numbers('y').status).toEqual(['true-zero', 'rounds-to-zero', 'provisional', 'provisional']);
    expect(used.numbers('y').texts[2]).toBe('2.5 p');
  });

  it('leaves a number out whose status says that it is suppressed', () => {
    expect(left({ data, roles: labelled }, 'place,y,n\na,1,5\nb,2 c,5\n')).toEqual(['2 suppressed-confidential y 2 c']);
  });

  it('refuses a status that is no number alone and means nothing without one', () => {
    expect(problems({ data, roles: labelled }, 'place,y,n\na,p,5\nb,2,5\n')).toMatchObject([
      { code: 'not-a-number', facts: { row: 1, found: 'p' } },
    ]);
  });

  it('leaves out blanks and declared codes of categories and groups, and takes other words as levels', () => {
    const terms = [{ column: 'region', as: 'category' }];
    const read = { statuses, missing: { region: ['?'] } };
    const text = 'place,y,n,region\na,1,5,North\nb,1,5,\nc,1,5,?\nd,1,5,..\ne,1,5,p\nf,1,5,South\n';
    const parts = { data: { file: 'cells.csv', read }, roles: labelled, terms };
    expect(left(parts, text)).toEqual(['2 blank region ', '3 missing region ?', '4 not-collected region ..']);
    expect(cells(parts, text).texts('region')).toEqual(['North', 'p', 'South']);
  });

  it('never applies missing codes and statuses to labels', () => {
    const read = { statuses, missing: { place: ['NA'] } };
    expect(cells({ data: { file: 'cells.csv', read }, roles: labelled }, 'place,y,n\nNA,1,5\nc,2,5\n').labels).toEqual([
      'NA',
      'c',
    ]);
  });

  it('asks of rivals, targets, tests and clusters what it asks of the chosen structure', () => {
    const parts = {
      roles: labelled,
      beside: [{ parts: [{ kind: 'proxy', column: 'a' }] }],
      target: { parts: [{ kind: 'proxy', column: 'b' }] },
      tests: { columns: ['d'] },
      inference: { kind: 'clustered', by: ['e'] },
    };
    const text = 'place,y,n,a,b,d,e\nu,1,5,1,1,1,x\nv,1,5,,1,1,x\nw,1,5,1,,1,x\nx,1,5,1,1,,x\ny,1,5,1,1,1,\n';
    expect(left(parts, text)).toEqual(['2 blank a ', '3 blank b ', '4 blank d ', '5 blank e ']);
  });

  it('counts the reasons where no cell is left', () => {
    const roles = { outcome: 'y', size: 'n', error: 's' };
    const parts = { data: { file: 'cells.csv', omit: [{ column: 'y', is: [9], because: 'test' }] }, roles };
    expect(problems(parts, 'y,n,s\n1,0,1\n1,2,0\n9.0,2,1\n,2,1\n')).toEqual([
      {
        code: 'no-cells-left',
        at: '/data',
        facts: { rows: 4, reasons: { 'size-not-positive': 1, 'error-not-positive': 1, 'omit-rule': 1, blank: 1 } },
      },
    ]);
    expect(problems({}, 'y,n\n')).toEqual([{ code: 'no-cells-left', at: '/data', facts: { rows: 0, reasons: {} } }]);
  });
});

describe('omit', () => {
  const used = (is: unknown, text = 'place,y,n\na,1,5\nb,2.50,5\nc,-3,5\nd,x,5\n') =>
    cells(
      {
        data: {
          file: 'cells.csv',
          omit: [
            { column: 'y', is, because: 'so' },
            { column: 'y', is: ['x'], because: 'word' },
          ],
        },
        roles: labelled,
      },
      text,
    ).labels;

  it.each<[unknown, string[]]>([
    [['1'], ['b', 'c']],
    [['2.5'], ['a', 'b', 'c']],
    [[2.5], ['a', 'c']],
    [['1', -3], ['b']],
    [{ from: 1 }, ['c']],
    [{ to: 1 }, ['b']],
    [{ from: 1, to: 2.5 }, ['c']],
    [{ from: 'a' }, ['a', 'b', 'c']],
  ])('of %j leaves %j', (is, labels) => {
    expect(used(is)).toEqual(labels);
  });

  it('asks which way the numbers are written before it compares them', () => {
    const data = { file: 'cells.csv', omit: [{ column: 'x', is: { from: 2 }, because: 'large' }] };
    expect(problems({ data }, 'y;n;x\n1;5;1,204\n')).toMatchObject([{ code: 'reads-both-ways', at: '/data/file' }]);
    expect(problems({ data: { ...data, omit: [] } }, 'y;n;x\n1;5;1,204\n')).toEqual([]);
  });
});

describe('roles', () => {
  const errors = (roles: object, text: string) => [
    ...(cells(
      { roles: { outcome: 'y', error: 'e', ...roles }, variance: { parts: [{ kind: 'given', scale: 'fixed' }] } },
      text,
    ).error ?? []),
  ];

  it('turn variances, half-widths and coefficients of variation into standard errors', () => {
    expect(errors({}, 'y,e\n-4,0.5\n')).toEqual([0.5]);
    expect(errors({ errorKind: 'variance' }, 'y,e\n-4,0.25\n')).toEqual([0.5]);
    expect(errors({ errorKind: 'cv' }, 'y,e\n-4,0.125\n')).toEqual([0.5]);
    // The normal point of .95, 1.959963984540054 (Abramowitz & Stegun 1964, table 26.5, to its digits)
    expect(errors({ errorKind: 'half-width', errorLevel: 0.95 }, 'y,e\n-4,1.959963984540054\n')[0]).toBeCloseTo(1, 14);
  });

  it('leave out a cell whose outcome of 0 makes a coefficient of variation say nothing', () => {
    const roles = { outcome: 'y', error: 'e', errorKind: 'cv' };
    expect(left({ roles, variance: { parts: [{ kind: 'given', scale: 'fixed' }] } }, 'y,e\n4,0.1\n0,0.1\n')).toEqual([
      '2 not-above-zero e 0.1',
    ]);
  });

  it('divide sizes by design effects, and leave out a design effect that is not above 0', () => {
    const parts = { roles: { outcome: 'y', size: 'n', designEffect: 'd' } };
    const text = 'y,n,d\n1,30,1.5\n1,30,0\n';
    expect([...(cells(parts, text).effectiveSize ?? [])]).toEqual([20]);
    expect(left(parts, text)).toEqual(['2 not-above-zero d 0']);
  });

  it('make a rate of a count and an exposure, the size beside them serving elsewhere', () => {
    const roles = { count: 'c', exposure: 'e', per: 1000, size: 'n' };
    const used = cells({ roles, variance: { parts: [{ kind: 'per-size' }] } }, 'c,e,n\n3,400,2\n');
    expect(used.outcome.high[0]).toBe(7.5);
    expect([used.counts?.[0], used.exposure?.[0], used.size?.[0]]).toEqual([3, 400, 2]);
  });

  it('refuse impossible values, but no count of a cell whose size is 0', () => {
    const shares = { count: 'c', size: 'n' };
    expect(problems({ roles: shares }, 'c,n\n3,0\n3,4\n')).toEqual([]);
    expect(problems({ roles: shares }, 'c,n\n-1,4\n5,4\n')).toMatchObject([
      { code: 'share-out-of-range', at: '/roles/count', facts: { row: 1, found: '-1' } },
      { code: 'count-above-size', facts: { row: 2, found: '5', size: '4' } },
    ]);
    const percent = { outcome: 'y', outcomeUnit: 'percent', size: 'n' };
    expect(problems({ roles: percent }, 'y,n\n100,4\n0,4\n')).toEqual([]);
    expect(problems({ roles: percent }, 'y,n\n100.01,4\n')).toMatchObject([
      { code: 'share-out-of-range', facts: { unit: 'percent' } },
    ]);
  });

  it('refuse transforms that are undefined in a used cell, and in no other', () => {
    const text = 'y,n,x\n1,5,1\n2,0,0\n3,5,4\n';
    const terms = [
      { column: 'x', transform: 'log' },
      { column: 'x', transform: 'inverse' },
    ];
    expect(problems({ terms }, text)).toEqual([]);
    expect(problems({ terms }, text.replace('2,0,0', '2,5,0'))).toMatchObject([
      { code: 'transform-undefined', at: '/terms/0/transform', facts: { row: 2, transform: 'log' } },
      { code: 'transform-undefined', at: '/terms/1/transform', facts: { transform: 'inverse' } },
    ]);
    expect(problems({ variance: { parts: [{ kind: 'proxy', column: 'x' }] } }, 'y,n,x\n1,5,-1\n')).toMatchObject([
      { code: 'transform-undefined', at: '/variance/parts/0/column', facts: { transform: 'proxy' } },
    ]);
    const log = {
      outcomeScale: 'log',
      roles: { outcome: 'y', error: 'x' },
      variance: { parts: [{ kind: 'given', scale: 'fixed' }] },
    };
    expect(problems(log, 'y,x\n0,1\n')).toMatchObject([
      { code: 'transform-undefined', at: '/outcomeScale', facts: { column: 'y' } },
    ]);
  });
});

describe('labels', () => {
  it('that differ by outer spaces or by their normal form are repeated', () => {
    expect(problems({ roles: labelled }, 'place,y,n\nBeck,1,5\n Beck ,2,5\n')).toEqual([
      { code: 'repeated-label', at: '/roles/label', facts: { label: 'Beck', rows: [1, 2] } },
    ]);
    expect(problems({ roles: labelled }, 'place,y,n\n\u00c4,1,5\nA\u0308,2,5\n')).toMatchObject([
      { code: 'repeated-label' },
    ]);
  });

  it('that differ by hidden characters alone are distinct, with a caution that names both rows', () => {
    expect(cells({ roles: labelled }, 'place,y,n\nElm,1,5\nFen,3,5\nEl\u200bm,2,5\n').cautions).toEqual([
      { code: 'labels-look-alike', group: 'for-record', facts: { labels: ['Elm', 'El\u200bm'], rows: [1, 3] } },
    ]);
  });

  it('may repeat in rows that a rule takes out, and may have blank parts', () => {
    const parts = {
      data: { file: 'cells.csv', omit: [{ column: 'y', is: [2], because: 'twice' }] },
      roles: { ...labelled, label: ['place', 'part'] },
    };
    expect(cells(parts, 'place,part,y,n\nA,,1,5\nA,,2,5\n').labels).toEqual(['A · ']);
  });
});

describe('names', () => {
  it('that no column has are all told, each at its place, with the nearest', () => {
    const parts = {
      data: {
        file: 'cells.csv',
        read: { missing: { why: ['1'] } },
        omit: [{ column: 'plac', is: ['a'], because: 'so' }],
        limits: { 'a/b': { rounding: 5 } },
      },
      roles: { ...labelled, label: ['Place'] },
      units: { nn: 'kg' },
      tests: { columns: ['yy'] },
    };
    expect(problems(parts, 'place,y,n\na,1,5\n')).toEqual([
      { code: 'unknown-column', at: '/data/read/missing/why', facts: { found: 'why', nearest: 'y' } },
      { code: 'unknown-column', at: '/data/omit/0/column', facts: { found: 'plac', nearest: 'place' } },
      { code: 'unknown-column', at: '/data/limits/a~1b', facts: { found: 'a/b', nearest: 'y' } },
      { code: 'unknown-column', at: '/roles/label/0', facts: { found: 'Place', nearest: 'place' } },
      { code: 'unknown-column', at: '/units/nn', facts: { found: 'nn', nearest: 'n' } },
      { code: 'unknown-column', at: '/tests/columns/0', facts: { found: 'yy', nearest: 'y' } },
    ]);
  });

  it('of two columns clash once the plan uses them', () => {
    expect(problems({}, 'y,n,x,x\n1,5,1,2\n')).toEqual([]);
    expect(problems({ terms: [{ column: 'x' }] }, 'y,n,x,x\n1,5,1,2\n')).toEqual([
      { code: 'name-clash', at: '/data/file', facts: { column: 'x', files: ['cells.csv'] } },
    ]);
  });

  it('are compared in normal form C', () => {
    expect(problems({ roles: { outcome: '\u00e9', size: 'n' } }, 'e\u0301,n\n1,5\n')).toEqual([]);
  });
});

describe('joins', () => {
  const join = (on: object, read = {}) => ({
    data: { file: 'cells.csv', join: [{ file: 'more.csv', on, read }] },
    roles: labelled,
  });
  const own = 'place,t,y,n\na,1,1,5\na,2,1,5\nb,1,1,5\n';

  it('bring their columns in by several keys, with their own statuses', () => {
    const parts = {
      ...join({ place: 'p', t: 't' }, { statuses: { x: 'not-collected' } }),
      roles: { ...labelled, label: ['place', 't'] },
      terms: [{ column: 'z' }],
    };
    const files = { 'cells.csv': own, 'more.csv': 'p;t;z\na;2;1,5\na;1;x\n' };
    const used = cells(parts, files);
    expect(used.columns).toEqual(['place', 't', 'y', 'n', 'z']);
    expect([...used.numbers('z').values.high]).toEqual([1.5]);
    expect(used.data.omitted.map(({ row, reason }) => [row, reason.code, reason.text])).toEqual([
      [1, 'not-collected', 'x'],
      [3, 'missing', ''],
    ]);
    expect(used.data.unmatched).toEqual([{ file: 'more.csv', side: 'ours', key: { place: 'b', t: '1' } }]);
  });

  it('tell a text that is no number by its row in the joined file', () => {
    const files = { 'cells.csv': own, 'more.csv': 'p,z\nc,1\nb,abt 3\na,2\n' };
    const parts = { ...join({ place: 'p' }), roles: { ...labelled, label: ['place', 't'] }, terms: [{ column: 'z' }] };
    expect(problems(parts, files)).toEqual([
      { code: 'not-a-number', at: '/terms/0/column', facts: { file: 'more.csv', row: 2, column: 'z', found: 'abt 3' } },
    ]);
  });

  it('name the keys that are not there, on either side', () => {
    expect(
      problems(
        { ...join({ plce: 'q' }), roles: { outcome: 'y', size: 'n' } },
        { 'cells.csv': own, 'more.csv': 'p,z\na,1\n' },
      ),
    ).toEqual([
      { code: 'unknown-column', at: '/data/join/0/on/plce', facts: { found: 'plce', nearest: 'place' } },
      { code: 'unknown-column', at: '/data/join/0/on/plce', facts: { found: 'q', nearest: 'p' } },
    ]);
  });

  it('of a file that cannot be read leave no name unknown, and all files are told together, before all else', () => {
    const parts = { ...join({ place: 'p' }), terms: [{ column: 'z' }], tests: { neighbours: 'pairs.csv' } };
    const text = 'place,t,y,n\na,1,abt 1,5\n';
    expect(problems(parts, { 'cells.csv': text, 'more.csv': '' })).toEqual([
      { code: 'empty-file', at: '/data/join/0/file', facts: { file: 'more.csv' } },
      { code: 'file-not-found', at: '/tests/neighbours', facts: { file: 'pairs.csv' } },
      { code: 'not-a-number', at: '/roles/outcome', facts: { file: 'cells.csv', row: 1, column: 'y', found: 'abt 1' } },
    ]);
    expect(problems(parts, { 'more.csv': 'p,z\na,1\n' })).toMatchObject([
      { at: '/data/file' },
      { at: '/tests/neighbours' },
    ]);
  });

  it('that read both ways name the joined file', () => {
    const files = { 'cells.csv': own, 'more.csv': 'p;z\na;1,204\nb;1,310\n' };
    const parts = { ...join({ place: 'p' }), roles: { ...labelled, label: ['place', 't'] }, terms: [{ column: 'z' }] };
    expect(problems(parts, files)).toMatchObject([
      { code: 'reads-both-ways', at: '/data/join/0/file', facts: { file: 'more.csv', row: 1 } },
    ]);
  });
});

describe('structures', () => {
  const text = 'place,y,n,class\na,1,5,town\nb,2,5,town\nc,3,5,country\nd,4,5,country\n';

  it('have no fixed parameter of a class that no used cell has', () => {
    const variance = { parts: [{ kind: 'per-class', column: 'class' }], fixed: { 'phi: twon': 4 } };
    expect(problems({ variance }, text)).toEqual([
      {
        code: 'unknown-parameter',
        at: '/variance/fixed/phi: twon',
        facts: { found: 'phi: twon', nearest: 'phi: town' },
      },
    ]);
    expect(problems({ variance: { ...variance, fixed: { 'phi: town': 4 } } }, text)).toEqual([]);
  });

  it('that are rivals have their serial orders checked too', () => {
    const beside = [
      { parts: [{ kind: 'per-size' }, { kind: 'between', correlation: { kind: 'serial', by: [], order: 'n' } }] },
    ];
    expect(problems({ roles: labelled, beside }, text)).toMatchObject([
      {
        code: 'order-repeats',
        at: '/beside/0/parts/1/correlation/order',
        facts: { found: '5', group: {}, labels: ['a', 'b', 'c', 'd'] },
      },
    ]);
  });

  const matrix = (part: object, content: string, more = {}) =>
    problems(
      { roles: labelled, variance: { parts: [{ kind: 'matrix', file: 'm.csv', scale: 'fixed', ...part }] }, ...more },
      { 'cells.csv': text, 'm.csv': content },
    );
  const lines = (rows: readonly (readonly (number | string)[])[], labels = ['a', 'b', 'c', 'd']) =>
    `,${labels.join()}\n${rows.map((row, i) => `${labels[i]},${row.join()}`).join('\n')}\n`;
  // Rank 3: the last line is the sum of the first two.
  const singular = [
    [2, 0, 0, 2],
    [0, 2, 0, 2],
    [0, 0, 1, 0],
    [2, 2, 0, 4],
  ];

  it('with a singular matrix are refused where it is inverted, and not where it is not', () => {
    const refused = [
      {
        code: 'matrix-not-positive-definite',
        at: '/variance/parts/0/file',
        facts: { labels: null, correlation: null },
      },
    ];
    expect(matrix({}, lines(singular))).toMatchObject(refused);
    expect(matrix({ freedom: 5 }, lines(singular))).toMatchObject(refused);
    expect(matrix({ freedom: 4 }, lines(singular))).toEqual([]);
    expect(matrix({}, lines(singular), { target: 'cells' })).toEqual([]);
  });

  it('with a clearly negative eigenvalue are refused in any case, by that eigenvalue where no pair is to blame', () => {
    // Correlations of -0.6 among three: smallest eigenvalue 1 - 2 * 0.6.
    const negative = [
      [1, -0.6, -0.6, 0],
      [-0.6, 1, -0.6, 0],
      [-0.6, -0.6, 1, 0],
      [0, 0, 0, 1],
    ];
    const [fault] = matrix({ freedom: 4 }, lines(negative)) as {
      facts: { smallestEigenvalue: number; labels: unknown };
    }[];
    expect(fault?.facts.labels).toBeNull();
    expect(fault?.facts.smallestEigenvalue).toBeCloseTo(-0.2, 14);
  });

  it('take mirrored entries that differ by rounding alone', () => {
    expect(
      matrix(
        {},
        lines([
          [1, 0.1, 0, 0],
          [0.1000000000005, 1, 0, 0],
          [0, 0, 1, 0],
          [0, 0, 0, 1],
        ]),
      ),
    ).toEqual([]);
    expect(
      matrix(
        {},
        lines([
          [1, 0.1, 0, 0],
          [0.100000000002, 1, 0, 0],
          [0, 0, 1, 0],
          [0, 0, 0, 1],
        ]),
      ),
    ).toMatchObject([
      { code: 'matrix-not-symmetric', facts: { labels: ['a', 'b'], found: ['0.1', '0.100000000002'] } },
    ]);
  });

  it('refuse a matrix with a word, a blank or a label that stands twice', () => {
    const identity = [
      [1, 0, 0, 0],
      [0, 1, 0, 0],
      [0, 0, 1, 0],
      [0, 0, 0, 1],
    ];
    expect(matrix({}, lines(identity).replace('b,0,1', 'b,none,1'))).toMatchObject([
      { code: 'not-a-number', facts: { row: 2, column: 'a', found: 'none' } },
    ]);
    expect(matrix({}, lines(identity).replace('b,0,1', 'b,,1'))).toMatchObject([
      { code: 'not-a-number', facts: { found: '' } },
    ]);
    expect(matrix({}, lines(identity, ['a', 'b', 'c', 'c']))).toMatchObject([
      { code: 'repeated-label', at: '/variance/parts/0/file', facts: { label: 'c', rows: [3, 4] } },
    ]);
  });

  it('name neighbours once, whatever the order, among used cells', () => {
    const parts = { roles: labelled, tests: { neighbours: 'pairs.csv' } };
    const files = { 'cells.csv': text.replace('c,3,5', 'c,3,0'), 'pairs.csv': 'from,to\na,b\nb,a\nd,a\nc,d\na,a\n' };
    expect(cells(parts, files).neighbours).toEqual([
      [0, 1],
      [0, 2],
    ]);
    expect(problems(parts, { ...files, 'pairs.csv': 'from,to\na,e\n' })).toEqual([
      { code: 'matrix-labels', at: '/tests/neighbours', facts: { file: 'pairs.csv', missing: [], unknown: ['e'] } },
    ]);
  });
});

it('preparing the same plan and files twice gives equal cells, and row order changes nothing but the order', () => {
  const rows = ['a,1,5', 'b,2,6', 'c,3,7', 'd,4,8'];
  const text = (lines: readonly string[]) => `place,y,n\n${lines.join('\n')}\n`;
  const one = cells({ roles: labelled }, text(rows));
  const other = cells({ roles: labelled }, text(rows.toReversed()));
  expect(prepare({ roles: labelled }, text(rows)).ok).toBe(true);
  expect([...other.outcome.high].toReversed()).toEqual([...one.outcome.high]);
  expect(other.labels.toReversed()).toEqual(one.labels);
});
