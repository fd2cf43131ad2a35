import type { Problem } from '@core/protocol/problems';
import { normalPlan, normalTabulation } from '@core/protocol/read';
import { describe, expect, it } from 'vitest';

// What keys demand of one another: CONTRACT.md "Roles", "Parts", "Estimate and inference", and INTAKE.md; each row is one rule.

type Json = Record<string, unknown>;

const plan: Json = {
  format: 'steelyard-plan/1',
  data: { file: 'cells.csv' },
  roles: { outcome: 'y', size: 'n', error: 'se' },
  terms: [{ column: 'income' }],
  variance: { parts: [{ kind: 'given', scale: 'fixed' }] },
};

function problemsOf(changes: Json): readonly Problem[] {
  const found = normalPlan({ ...plan, ...changes });
  return found.ok ? [] : found.problems;
}

function parts(...list: Json[]): Json {
  return { variance: { parts: list } };
}

const given = { kind: 'given', scale: 'fixed' };
const between = { kind: 'between' };
const serial = { kind: 'serial', by: [], order: 'year' };
const exchangeable = { kind: 'exchangeable', by: ['region'] };
const rate = { roles: { count: 'c', exposure: 'e' } };
const counts = { kind: 'counts', scale: 'fixed' };
const binomial = { kind: 'binomial', scale: 'fixed' };

describe('keys that exclude one another are refused together', () => {
  it.each<[string, Json, string, string[]]>([
    ['per without exposure', { roles: { outcome: 'y', error: 'se', per: 1000 } }, '/roles', ['per', 'exposure']],
    [
      'a unit beside a count',
      { roles: { count: 'c', size: 'n', error: 'se', outcomeUnit: 'share' } },
      '/roles',
      ['outcomeUnit', 'count'],
    ],
    [
      'a level without half-widths',
      { roles: { outcome: 'y', error: 'se', errorLevel: 0.9 } },
      '/roles',
      ['errorKind', 'errorLevel'],
    ],
    [
      'group and decimal mark alike',
      { data: { file: 'f', read: { group: ',', decimal: ',' } } },
      '/data/read',
      ['group', 'decimal'],
    ],
    [
      'group mark and delimiter alike',
      { data: { file: 'f', read: { group: ',', delimiter: ',' } } },
      '/data/read',
      ['group', 'delimiter'],
    ],
    [
      'a token both status and missing, in a joined file',
      {
        data: {
          file: 'f',
          join: [{ file: 'g', on: { a: 'b' }, read: { statuses: { x: 'blank' }, missing: { y: ['x'] } } }],
        },
      },
      '/data/join/0/read',
      ['statuses', 'missing'],
    ],
    [
      'a correlation on a matrix',
      parts({ kind: 'matrix', file: 'm', scale: 'fixed', correlation: serial }),
      '/variance/parts/0',
      ['kind', 'correlation'],
    ],
    [
      'transform and power',
      { terms: [{ column: 'a', transform: 'log', power: 2 }] },
      '/terms/0',
      ['transform', 'power'],
    ],
    [
      'a column beside a product',
      { terms: [{ column: 'a', product: [{ column: 'a' }, { column: 'b' }] }] },
      '/terms/0',
      ['column', 'product'],
    ],
    [
      'rounding and suppression of one column',
      { data: { file: 'f', limits: { y: { rounding: 5, suppressed: [0, 3] } } } },
      '/data/limits/y',
      ['rounding', 'suppressed'],
    ],
    ['halves outside logit', { addedHalf: 'no' }, '', ['outcomeScale', 'addedHalf']],
    [
      'halves under full likelihood',
      {
        ...parts(binomial),
        roles: { count: 'c', size: 'n' },
        outcomeScale: 'logit',
        addedHalf: 'no',
        estimate: { method: 'full' },
      },
      '',
      ['addedHalf', 'estimate'],
    ],
    ['logit of a number', { outcomeScale: 'logit' }, '/outcomeScale', ['outcomeScale', 'outcomeUnit']],
    [
      'logit of a rate',
      { ...parts(counts), ...rate, outcomeScale: 'logit' },
      '/outcomeScale',
      ['outcomeScale', 'exposure'],
    ],
    [
      'log of counts by another method',
      { ...parts(counts), ...rate, outcomeScale: 'log', estimate: { method: 'least-squares' } },
      '',
      ['outcomeScale', 'estimate'],
    ],
    [
      'a binomial part for a rate',
      { ...parts(binomial), roles: { count: 'c', exposure: 'e', size: 'n' } },
      '/variance/parts/0',
      ['kind', 'exposure'],
    ],
    [
      'least squares with an unknown between variance',
      { ...parts(given, between), estimate: { method: 'least-squares' } },
      '',
      ['variance', 'estimate'],
    ],
    [
      'moments without a between part',
      { estimate: { method: 'moments', rule: 'hanushek' } },
      '',
      ['variance', 'estimate'],
    ],
    [
      'moments with a free scale',
      { ...parts({ ...given, scale: 'free' }, between), estimate: { method: 'moments', rule: 'hanushek' } },
      '',
      ['variance', 'estimate'],
    ],
    [
      'moments beside another sampling part',
      { ...parts({ kind: 'per-size' }, between), estimate: { method: 'moments', rule: 'hanushek' } },
      '',
      ['variance', 'estimate'],
    ],
    ['Knapp-Hartung without a between part', { inference: { kind: 'knapp-hartung' } }, '', ['variance', 'inference']],
    [
      'Kenward-Roger under full likelihood',
      { ...parts(given, between), estimate: { method: 'full' }, inference: { kind: 'kenward-roger' } },
      '',
      ['estimate', 'inference'],
    ],
    [
      'Kenward-Roger with other weights',
      { ...parts(given, between), target: 'cells', inference: { kind: 'kenward-roger' } },
      '',
      ['target', 'inference'],
    ],
    [
      'two ways with CR3',
      { inference: { kind: 'clustered', by: ['a'], alsoBy: ['b'], correction: 'CR3' } },
      '/inference',
      ['alsoBy', 'correction'],
    ],
    [
      'two ways that are one',
      { inference: { kind: 'clustered', by: ['a', 'b'], alsoBy: ['b', 'a'] } },
      '/inference',
      ['by', 'alsoBy'],
    ],
  ])('%s', (_, changes, at, keys) => {
    expect(problemsOf(changes)).toEqual([{ code: 'not-together', at, facts: { keys } }]);
  });
});

describe('a role that something needs is asked for', () => {
  const bare = { roles: { outcome: 'y', error: 'se' } };
  it.each<[string, Json, string, string, string]>([
    ['per-size', { ...bare, ...parts({ kind: 'per-size' }) }, '/variance/parts/0', 'size', 'per-size'],
    [
      'size-power',
      { ...bare, ...parts({ kind: 'size-power', exponent: 1 }) },
      '/variance/parts/0',
      'size',
      'size-power',
    ],
    [
      'per-class by size',
      { ...bare, ...parts({ kind: 'per-class', column: 'a', perSize: true }) },
      '/variance/parts/0',
      'size',
      'per-class',
    ],
    ['the target persons', { ...bare, target: 'persons' }, '/target', 'size', 'persons'],
    [
      'a target of its own',
      { ...bare, target: { parts: [{ kind: 'per-size' }] } },
      '/target/parts/0',
      'size',
      'per-size',
    ],
    ['the rival per-size', { ...bare, beside: ['constant', 'per-size'] }, '/beside/1', 'size', 'per-size'],
    [
      'the rival given',
      { roles: { outcome: 'y', size: 'n' }, ...parts({ kind: 'per-size' }), beside: ['given'] },
      '/beside/0',
      'error',
      'given',
    ],
    [
      'a rival of its own',
      { roles: { outcome: 'y', size: 'n' }, ...parts({ kind: 'per-size' }), beside: [{ parts: [given] }] },
      '/beside/0/parts/0',
      'error',
      'given',
    ],
    ['binomial of a plain number', parts(binomial), '/variance/parts/0', 'count', 'binomial'],
    [
      'counts without exposure',
      { roles: { count: 'c', size: 'n' }, ...parts(counts) },
      '/variance/parts/0',
      'exposure',
      'counts',
    ],
    ['a design effect', { roles: { outcome: 'y', error: 'se', designEffect: 'd' } }, '/roles', 'size', 'designEffect'],
    ['sizes known to within', { ...bare, data: { file: 'f', sizeWithin: 2 } }, '/data', 'size', 'sizeWithin'],
  ])('by %s', (_, changes, at, role, part) => {
    expect(problemsOf(changes)).toEqual([{ code: 'role-needed', at, facts: { role, part } }]);
  });

  it('binomial takes a share or a percentage with its size', () => {
    expect(problemsOf({ roles: { outcome: 'y', outcomeUnit: 'percent', size: 'n' }, ...parts(binomial) })).toEqual([]);
  });

  it('a count without size and exposure lacks its size', () => {
    expect(problemsOf({ roles: { count: 'c', error: 'se' } })).toEqual([
      { code: 'missing-key', at: '/roles', facts: { key: 'size' } },
    ]);
  });
});

describe('numbers outside their range are told with it', () => {
  it.each<[string, Json, string, number, number | null, number | null]>([
    ['a level of 1', { inference: { kind: 'model', level: 1 } }, '/inference/level', 1, 0, 1],
    ['per 0', { roles: { count: 'c', exposure: 'e', error: 'se', per: 0 } }, '/roles/per', 0, 0, null],
    [
      'a share above 1',
      { questions: [{ kind: 'average', of: [{ where: { income: 1 }, share: 1.2 }] }] },
      '/questions/0/of/0/share',
      1.2,
      0,
      1,
    ],
    [
      'broken replications',
      { inference: { kind: 'wild', by: ['a'], replications: 9.5 } },
      '/inference/replications',
      9.5,
      1,
      null,
    ],
    ['a power of 0', { terms: [{ column: 'a', power: 0 }] }, '/terms/0/power', 0, 1, null],
    ['no freedom', parts({ ...given, freedom: 0 }), '/variance/parts/0/freedom', 0, 0, null],
    ['rounding to 0', { data: { file: 'f', limits: { y: { rounding: 0 } } } }, '/data/limits/y/rounding', 0, 0, null],
    [
      'limits that cross',
      { data: { file: 'f', limits: { y: { suppressed: [3, 1] } } } },
      '/data/limits/y/suppressed/1',
      1,
      3,
      null,
    ],
    [
      'a range that ends before it begins',
      { data: { file: 'f', omit: [{ column: 'a', is: { from: 5, to: 1 }, because: 'x' }] } },
      '/data/omit/0/is/to',
      1,
      5,
      null,
    ],
    [
      'a negative between variance',
      { variance: { parts: [given, between], fixed: { tau2: -1 } } },
      '/variance/fixed/tau2',
      -1,
      0,
      null,
    ],
    [
      'a scale of 0',
      { variance: { parts: [{ ...given, scale: 'free' }], fixed: { phi: 0 } } },
      '/variance/fixed/phi',
      0,
      0,
      null,
    ],
    [
      'a correlation of 1',
      { variance: { parts: [{ ...given, correlation: serial }], fixed: { 'rho: given': 1 } } },
      '/variance/fixed/rho: given',
      1,
      -1,
      1,
    ],
    ['a difference of 0 that matters', { matters: { income: 0 } }, '/matters/income', 0, 0, null],
  ])('%s', (_, changes, at, found, low, high) => {
    expect(problemsOf(changes)).toEqual([{ code: 'out-of-range', at, facts: { found, low, high } }]);
  });
});

describe('lists that must name something', () => {
  it.each<[string, Json, string, string]>([
    ['label', { roles: { label: [], outcome: 'y', error: 'se' } }, '/roles/label', 'label'],
    [
      'exchangeable by',
      parts({ ...given, correlation: { kind: 'exchangeable', by: [] } }),
      '/variance/parts/0/correlation/by',
      'by',
    ],
    ['clusters', { inference: { kind: 'clustered', by: [] } }, '/inference/by', 'by'],
    ['join keys', { data: { file: 'f', join: [{ file: 'g', on: {} }] } }, '/data/join/0/on', 'on'],
    ['omitted values', { data: { file: 'f', omit: [{ column: 'a', is: [], because: 'x' }] } }, '/data/omit/0/is', 'is'],
    [
      'a range open at both ends',
      { data: { file: 'f', omit: [{ column: 'a', is: {}, because: 'x' }] } },
      '/data/omit/0/is',
      'is',
    ],
    ['terms without an intercept', { terms: [], intercept: false }, '', 'terms'],
    ['a combination', { questions: [{ kind: 'combination', of: {} }] }, '/questions/0/of', 'of'],
    ['a name that is no text', { data: { file: '' } }, '/data/file', 'file'],
  ])('%s', (_, changes, at, key) => {
    expect(problemsOf(changes)).toEqual([{ code: 'empty-list', at, facts: { key } }]);
  });

  it('serial, lag and change take an empty "by": one series', () => {
    const derive = [{ name: 'd', as: 'lag', of: 'a', by: [], order: 't' }];
    expect(problemsOf({ data: { file: 'f', derive }, ...parts({ ...given, correlation: serial }) })).toEqual([]);
  });
});

describe('parts that say the same', () => {
  const same = (...kinds: string[]) => [{ code: 'not-identified', at: '/variance/parts', facts: { parts: kinds } }];
  const perClass = { kind: 'per-class', column: 'a' };

  it('constant and between, in the order in which they stand', () => {
    expect(problemsOf(parts(between, { kind: 'constant' }))).toEqual(same('between', 'constant'));
    expect(problemsOf(parts({ kind: 'constant' }, { kind: 'between', correlation: exchangeable }))).toEqual(
      same('constant', 'between'),
    );
  });

  it('two shared parts by the same columns', () => {
    const [one, other] = [
      { kind: 'shared', by: ['a', 'b'] },
      { kind: 'shared', by: ['b', 'a'] },
    ];
    expect(problemsOf(parts(given, one, other))).toEqual(same('shared', 'shared'));
  });

  it('are told apart by size, by a serial correlation, or by a parameter that is set', () => {
    expect(problemsOf(parts({ ...perClass, perSize: true }, between))).toEqual([]);
    expect(problemsOf(parts({ kind: 'constant' }, { kind: 'between', correlation: serial }))).toEqual([]);
    expect(problemsOf({ variance: { parts: [perClass, between], fixed: { 'phi: north': 2 } } })).toEqual([]);
    expect(problemsOf({ variance: { parts: [{ kind: 'constant' }, between], fixed: { tau2: 2 } } })).toEqual([]);
  });
});

describe('variance parameters that are set', () => {
  const unknown = (found: string, nearest: string | null) => [
    { code: 'unknown-parameter', at: `/variance/fixed/${found}`, facts: { found, nearest } },
  ];
  const fixing = (fixed: Json, ...list: Json[]) => problemsOf({ variance: { parts: list, fixed } });
  const logLinear = {
    kind: 'log-linear',
    terms: [
      { column: 'n', transform: 'log' },
      { column: 'a', as: 'category' },
    ],
  };

  it('are known by the names of the result', () => {
    expect(fixing({ 'gamma: intercept': 1, 'gamma: log(n)': -1, 'gamma: a: x': 2 }, logLinear)).toEqual([]);
    expect(fixing({ delta: 1 }, { kind: 'size-power', exponent: 'estimate' })).toEqual([]);
    expect(fixing({ 'omega2: region × year': 1 }, given, { kind: 'shared', by: ['region', 'year'] })).toEqual([]);
    expect(fixing({ 'rho: between': 0.5 }, given, { kind: 'between', correlation: serial })).toEqual([]);
  });

  it('are refused where the structure has none of that name, with the nearest', () => {
    expect(fixing({ delta: 1 }, { kind: 'size-power', exponent: 1 })).toEqual(unknown('delta', 'phi'));
    expect(fixing({ 'gamma: a': 1 }, logLinear)).toEqual(unknown('gamma: a', 'gamma: log(n)'));
    expect(fixing({ phi: 1 }, { kind: 'per-class', column: 'a' })).toEqual(unknown('phi', 'phi: CLASS'));
    expect(fixing({ tau2: 1 }, given)).toEqual(unknown('tau2', null));
  });
});

describe('terms and questions', () => {
  it('a column called intercept clashes with the constant, and with nothing where there is none', () => {
    expect(problemsOf({ terms: [{ column: 'intercept' }] })).toEqual([
      { code: 'equal-names', at: '/terms/0', facts: { name: 'intercept', first: '/intercept' } },
    ]);
    expect(problemsOf({ terms: [{ column: 'intercept' }], intercept: false })).toEqual([]);
  });

  it('names are compared in normal form C', () => {
    expect(problemsOf({ terms: [{ column: '\u00e9' }, { column: 'e\u0301', as: 'category' }] })).toEqual([
      { code: 'equal-names', at: '/terms/1', facts: { name: 'e\u0301', first: '/terms/0' } },
    ]);
    const expect1 = { kind: 'expect', where: { 'e\u0301': 1 } };
    expect(problemsOf({ terms: [{ column: '\u00e9' }], questions: [expect1] })).toEqual([]);
  });

  it('a fitted average needs every column in each of its cells, those of products and of what is taken off included', () => {
    const terms = [{ column: 'a' }, { product: [{ column: 'a' }, { column: 'b' }] }];
    const of = [{ where: { a: 1, b: 2 }, share: 1 }];
    const minus = [{ where: { a: 1 }, share: 1 }];
    expect(problemsOf({ terms, questions: [{ kind: 'average', of, minus }] })).toEqual([
      { code: 'missing-key', at: '/questions/0/minus/0/where', facts: { key: 'b' } },
    ]);
  });

  it('a product needs two factors, and a baseline the word that makes a category', () => {
    expect(problemsOf({ terms: [{ product: [{ column: 'a' }] }] })).toEqual([
      { code: 'wrong-length', at: '/terms/0/product', facts: { found: 1, expected: 2 } },
    ]);
    expect(problemsOf({ terms: [{ column: 'a', baseline: 'x' }] })).toEqual([
      { code: 'missing-key', at: '/terms/0', facts: { key: 'as' } },
    ]);
    expect(problemsOf({ terms: [{ column: 'a', transfrom: 'log' }] })).toEqual([
      { code: 'unknown-key', at: '/terms/0/transfrom', facts: { found: 'transfrom', nearest: 'transform' } },
    ]);
  });

  it('names of prototypes are names like others', () => {
    const units = { constructor: 'firm', toString: 'x' };
    const found = normalPlan({ ...plan, units, terms: [{ column: 'constructor' }, { column: '__proto__' }] });
    expect(found.ok && Object.entries(found.value.units)).toEqual(Object.entries(units));
    expect(problemsOf(JSON.parse('{"constructor": 1}') as Json)).toEqual([
      { code: 'unknown-key', at: '/constructor', facts: { found: 'constructor', nearest: 'format' } },
    ]);
    const proto = normalPlan({ ...plan, units: JSON.parse('{"__proto__": "kg"}') as Json });
    expect(proto.ok && Object.entries(proto.value.units)).toEqual([['__proto__', 'kg']]);
  });
});

describe('every problem of the form is reported at once', () => {
  it('in document order, each section judged that has no fault of its own', () => {
    const found = normalPlan({
      format: 'steelyard-plan/1',
      roles: { outcome: 'y', per: 10, zise: 'n' },
      inference: { kind: 'model', level: 95 },
      terms: [{ column: 'a' }, { column: 'a' }],
      variance: { parts: [given, { kind: 'per-size' }] },
      beside: ['constant', 'giwen'],
    });
    expect(found.ok ? [] : found.problems.map(({ code, at }) => [code, at])).toEqual([
      ['missing-key', ''],
      ['unknown-key', '/roles/zise'],
      ['out-of-range', '/inference/level'],
      ['equal-names', '/terms/1'],
      ['two-sampling-parts', '/variance/parts/1'],
      ['unknown-kind', '/beside/1'],
    ]);
  });

  it('null in a required key is a key left out, in an optional one nothing said', () => {
    expect(problemsOf({ variance: null, title: null, tests: null })).toEqual([
      { code: 'missing-key', at: '', facts: { key: 'variance' } },
    ]);
    expect(problemsOf({ ...parts({ kind: 'shared', by: ['a'], correlation: null }, given) })).toEqual([]);
    expect(problemsOf({ terms: [{ column: 'a', power: null, as: null }] })).toEqual([]);
  });
});

describe('the method that is taken where none is stated', () => {
  const method = (changes: Json) => {
    const found = normalPlan({ ...plan, ...changes });
    return found.ok ? found.value.estimate : found.problems;
  };
  it.each<[string, Json, string]>([
    ['a free scale', parts({ ...given, scale: 'free' }), 'least-squares'],
    ['nothing unknown', { variance: { parts: [given, between], fixed: { tau2: 2 } } }, 'least-squares'],
    [
      'a scale beside a known between part',
      { variance: { parts: [{ kind: 'per-size' }, between], fixed: { tau2: 2 } } },
      'restricted',
    ],
    ['a between part', parts(given, between), 'restricted'],
    ['an exponent', parts({ kind: 'proxy', column: 'a', exponent: 'estimate' }), 'restricted'],
    ['a proxy of known exponent', parts({ kind: 'proxy', column: 'a' }), 'least-squares'],
    ['a correlation', parts({ kind: 'constant', correlation: exchangeable }), 'restricted'],
    [
      'a correlation that is set',
      { variance: { parts: [{ kind: 'constant', correlation: serial }], fixed: { 'rho: constant': 0.4 } } },
      'least-squares',
    ],
    ['a scale per class', parts({ kind: 'per-class', column: 'a' }), 'restricted'],
    ['counts on a log scale', { ...parts(counts), ...rate, outcomeScale: 'log' }, 'full'],
    ['counts as they are', { ...parts(counts), ...rate }, 'least-squares'],
  ])('%s', (_, changes, expected) => {
    expect(method(changes)).toEqual({ method: expected });
  });

  it('clustered errors are CR2, two ways CR1', () => {
    const correction = (inference: Json) => {
      const found = normalPlan({ ...plan, inference });
      return found.ok && found.value.inference.kind === 'clustered' ? found.value.inference.correction : null;
    };
    expect(correction({ kind: 'clustered', by: ['a'] })).toBe('CR2');
    expect(correction({ kind: 'clustered', by: ['a'], alsoBy: ['b'] })).toBe('CR1');
  });
});

describe('tabulations', () => {
  const tabulation: Json = {
    format: 'steelyard-tabulation/1',
    microdata: { file: 'people.csv' },
    outcome: { kind: 'mean', of: 'hours' },
    cells: [{ column: 'region' }],
  };
  const replicates = (more: Json) => ({
    microdata: { file: 'p', replicates: { columns: ['r1', 'r2'], rule: 'fay', ...more } },
  });
  it.each<[string, Json, string, string, object]>([
    ['replicates that are not there', { variance: 'replicates' }, 'missing-key', '/microdata', { key: 'replicates' }],
    [
      "Fay's constant left out",
      replicates({}),
      'must-be-stated',
      '/microdata/replicates',
      { key: 'overall', choices: null },
    ],
    [
      "Fay's constant of 1",
      replicates({ overall: 1 }),
      'out-of-range',
      '/microdata/replicates/overall',
      { found: 1, low: 0, high: 1 },
    ],
    [
      'strata of the replicates left out',
      replicates({ rule: 'delete-one-per-stratum' }),
      'must-be-stated',
      '/microdata/replicates',
      { key: 'perReplicate', choices: null },
    ],
    [
      'a factor that is a text',
      replicates({ rule: 'provider', perReplicate: [1, 'a'] }),
      'wrong-type',
      '/microdata/replicates/perReplicate/1',
      { found: 'string', expected: 'number' },
    ],
    [
      'two outcomes of one name',
      {
        outcome: [
          { kind: 'mean', of: 'a' },
          { kind: 'mean', of: 'a' },
        ],
      },
      'equal-names',
      '/outcome/1',
      { name: 'mean of a', first: '/outcome/0' },
    ],
    [
      'one grouping column twice',
      { cells: [{ column: 'a' }, { column: 'a', bands: [1, 2] }] },
      'equal-names',
      '/cells/1',
      { name: 'a', first: '/cells/0' },
    ],
    [
      'one limit, which is no band',
      { cells: [{ column: 'a', bands: [1] }] },
      'wrong-length',
      '/cells/0/bands',
      { found: 1, expected: 2 },
    ],
    [
      'equal limits',
      { cells: [{ column: 'a', bands: [1, 1] }] },
      'not-increasing',
      '/cells/0/bands',
      { column: 'a', before: 1, found: 1 },
    ],
    [
      'an outcome of a kind that is none',
      { outcome: { kind: 'meen', of: 'a' } },
      'unknown-kind',
      '/outcome/kind',
      { found: 'meen', nearest: 'mean' },
    ],
    [
      'one-PSU strata handled otherwise',
      { onePsuStrata: 'refused' },
      'unknown-kind',
      '/onePsuStrata',
      { found: 'refused', nearest: 'refuse' },
    ],
  ])('%s', (_, changes, code, at, facts) => {
    const found = normalTabulation({ ...tabulation, ...changes });
    expect(found.ok ? [] : found.problems).toEqual([{ code, at, facts }]);
  });

  it('strata of the replicates may be texts', () => {
    const found = normalTabulation({
      ...tabulation,
      ...replicates({ rule: 'delete-one-per-stratum', perReplicate: ['1', 2] }),
    });
    expect(found.ok).toBe(true);
  });
});
