import type { Columns, Files, Said } from './hostile';

/** A plan with the table and the files that it names. */
export interface Drawn {
  readonly columns: Columns;
  readonly said: Said;
  readonly files: Files;
}

/** The same stream of numbers between 0 and 1 for the same seed. */
export function stream(seed: number): () => number {
  let state = Math.imul(seed, 2654435761) >>> 0;
  const next = () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return (state >>> 8) / 2 ** 24;
  };
  for (let i = 0; i < 8; i++) next();
  return next;
}

interface Dice {
  readonly next: () => number;
  readonly pick: <T>(of: readonly T[]) => T;
  readonly chance: (share: number) => boolean;
  /** Near normal, variance 1/2. */
  readonly bell: () => number;
}

function diceOf(seed: number): Dice {
  const next = stream(seed);
  return {
    next,
    pick: (of) => of[Math.floor(next() * of.length)] as never,
    chance: (share) => next() < share,
    bell: () => next() + next() + next() + next() + next() + next() - 3,
  };
}

const short = (x: number) => Number(x.toPrecision(6));

/** Regions (in two zones) by years, with a column for every role; some tables are hostile in one way or another. */
function tableOf({ next, pick, chance, bell }: Dice) {
  const regions = pick([3, 4, 5, 6, 7, 9]);
  const cells = Math.max(3, Math.floor(regions * (1.6 + 3 * next())));
  const each = <T>(of: (g: number) => T) => Array.from({ length: cells }, (_, g) => of(g));
  const region = (g: number) => g % regions;
  const largest = pick([3, 50, 1e3, 1e3, 1e6, 1e12]);
  const step = pick([() => 1, () => 1, () => 0.5, (t: number) => 1 + (t % 3)]);
  const years: number[] = [2000];
  for (let t = 1; t < cells; t++) years.push((years[t - 1] as number) + step(t));
  const n = each(() => 1 + Math.floor(largest ** next()));
  const x = each(() => short(10 * next()));
  const w = each(() => short(bell()));
  const noise = pick([1, 1, 1, 1, 1e-6, 0, 50]);
  const shock = each(bell);
  const error = pick([() => 0.3, () => 0.1 + next(), () => 0.1 + next(), () => 10 ** (3 * next() - 2)]);
  const unit = pick([1, 1, 1, 1, 1e-9, 1e9]);
  const y = each((g) => {
    const own = bell() * (0.3 + 3 / Math.sqrt(n[g] as number)) + (shock[region(g)] as number);
    return short(unit * (20 + (x[g] as number) / 2 - (w[g] as number) + noise * own));
  });
  const share = pick([0.3, 0.3, 0.05, 0.95]);
  return {
    region: each((g) => `r${region(g)}`),
    zone: each((g) => `z${region(g) % Math.max(2, Math.floor(regions / 2))}`),
    year: each((g) => years[Math.floor(g / regions)] as number),
    x,
    w,
    z: each(() => short(0.2 + 3 * next())),
    kind: each(() => pick(['A', 'B', 'C'])),
    n,
    se: each(() => short(unit * error())),
    f: each(() => 3 + Math.floor(30 * next())),
    deff: each(() => short(1 + next())),
    sd: each(() => short(unit * (0.5 + next()))),
    y: y.map((value) => (chance(0.03) ? 30 * value : value)),
    count: each((g) => Math.round((n[g] as number) * Math.min(1, Math.max(0, share + 0.3 * (next() - 0.5))))),
    exposure: each((g) => 3 * (n[g] as number)),
    percent: each(() => short(100 * Math.min(0.99, Math.max(0.01, share + 0.3 * (next() - 0.5))))),
  };
}

type Table = ReturnType<typeof tableOf>;

/** A square of covariances between all cells: diagonal, correlated inside regions, full, hardly or not quite of full rank. */
function matrixOf(table: Table, { pick, bell }: Dice): string {
  const labels = table.region.map((region, g) => `${region} · ${table.year[g]}`);
  const usual = ['diagonal', 'blocks', 'blocks', 'full', 'barely'];
  const shape = pick(pick([usual, usual, usual, ['singular', 'indefinite']]));
  const rank = Math.max(1, Math.floor(labels.length / 2));
  const loads = table.region.map(() => Array.from({ length: rank }, bell));
  const rho = (i: number, j: number): number => {
    if (i === j) return 1;
    const together = table.region[i] === table.region[j];
    if (shape === 'blocks') return together ? 0.4 : 0;
    if (shape === 'full') return 0.3 ** Math.abs(i - j);
    if (shape === 'barely') return together ? 1 - 1e-9 : 0;
    if (shape === 'indefinite') return together ? -0.9 : 0;
    return 0;
  };
  const dot = (i: number, j: number) =>
    (loads[i] as number[]).reduce((sum, value, a) => sum + value * ((loads[j] as number[])[a] as number), 0);
  const entry = (i: number, j: number) =>
    shape === 'singular'
      ? Number(dot(Math.min(i, j), Math.max(i, j)).toPrecision(17))
      : rho(i, j) * (table.se[i] as number) * (table.se[j] as number);
  return [
    ['', ...labels],
    ...labels.map((label, i) => [label, ...labels.map((_, j) => entry(Math.max(i, j), Math.min(i, j)))]),
  ]
    .map((row) => row.join(','))
    .join('\n');
}

const category = (column: string) => ({ column, as: 'category' });

const terms: readonly (readonly Said[])[] = [
  [],
  [{ column: 'x' }],
  [{ column: 'x' }],
  [{ column: 'x' }, { column: 'w' }],
  [{ column: 'x' }, category('kind')],
  [
    { column: 'z', transform: 'log' },
    { column: 'x', power: 2 },
  ],
  [category('region'), { column: 'w' }],
  [{ column: 'x' }, category('kind'), { product: [{ column: 'x' }, category('kind')] }],
];

function correlationOf({ pick }: Dice): Said {
  return pick([
    { kind: 'exchangeable', by: ['region'] },
    { kind: 'exchangeable', by: ['zone'] },
    { kind: 'exchangeable', by: ['year'] },
    { kind: 'exchangeable', by: ['kind'] },
    { kind: 'serial', by: ['region'], order: 'year' },
    { kind: 'serial', by: ['region'], order: 'year' },
    { kind: 'serial', by: [], order: 'x' },
    { kind: 'serial', by: ['zone'], order: 'year' },
  ]);
}

/** Sampling parts, each with the parameters that a user may set. */
const sampling: readonly (readonly [part: Said, settable: Said])[] = [
  [{ kind: 'constant' }, { phi: 2 }],
  [{ kind: 'per-size' }, { phi: 9 }],
  [{ kind: 'given', scale: 'fixed' }, {}],
  [{ kind: 'given', scale: 'fixed', freedom: 12 }, {}],
  [{ kind: 'given', scale: 'fixed', freedom: { column: 'f' } }, {}],
  [{ kind: 'given', scale: 'free' }, { phi: 1 }],
  [{ kind: 'matrix', file: 'square.csv', scale: 'fixed' }, {}],
  [{ kind: 'matrix', file: 'square.csv', scale: 'free' }, { phi: 1 }],
  [{ kind: 'matrix', file: 'square.csv', scale: 'fixed', freedom: 40 }, {}],
  [{ kind: 'matrix', file: 'square.csv', scale: 'free', freedom: 3 }, {}],
  [{ kind: 'size-power', exponent: 0.5 }, { phi: 3 }],
  [{ kind: 'size-power', exponent: 'estimate' }, { delta: 0.7 }],
  [{ kind: 'proxy', column: 'z', exponent: 1 }, { phi: 3 }],
  [{ kind: 'proxy', column: 'z', exponent: 'estimate' }, { delta: 0.7 }],
  [{ kind: 'log-linear', terms: [{ column: 'z' }] }, { 'gamma: z': 0.2 }],
  [{ kind: 'log-linear', terms: [category('kind')] }, { 'gamma: intercept': 0.2 }],
  [{ kind: 'per-class', column: 'kind' }, { 'phi: A': 1 }],
  [{ kind: 'per-class', column: 'kind', perSize: true }, { 'phi: B': 1 }],
];

interface Parts {
  readonly parts: Said[];
  readonly fixed: Said;
}

function partsOf(dice: Dice, counted: Said | null): Parts {
  const { pick, chance } = dice;
  const [first, settable] = counted ? [counted, {}] : pick(sampling);
  const tied = first['kind'] !== 'matrix' && chance(0.2) ? { ...first, correlation: correlationOf(dice) } : first;
  // A constant and a between part say the same: tried now and then.
  const alike = first['kind'] === 'constant' || (first['kind'] === 'per-class' && !first['perSize']);
  const between: Said[] = chance(alike ? 0.05 : 0.4)
    ? [{ kind: 'between', ...(chance(0.35) ? { correlation: correlationOf(dice) } : {}) }]
    : [];
  const groups = pick<string[][]>([
    [],
    [],
    [],
    [],
    [['region']],
    [['year']],
    [['zone']],
    [['region'], ['year']],
    [['zone'], ['region']],
  ]);
  const settings: Said[] = [
    settable,
    ...between.map(() => ({ tau2: pick([0, 0.3]) })),
    ...groups.map(([by]) => ({ [`omega2: ${by}`]: pick([0, 0.2]) })),
    ...(tied === first ? [] : [{ [`rho: ${first['kind']}`]: 0.2 }]),
    chance(0.1) ? { 'omega2: nowhere': 1 } : {},
  ];
  const parts = [tied, ...between, ...groups.map((by) => ({ kind: 'shared', by }))];
  return { parts, fixed: chance(0.25) ? pick(settings) : {} };
}

type Column = readonly string[];

/** The columns by which each part ties cells; a matrix mostly by region. */
function tiesOf({ parts }: Parts): Column[] {
  return parts.flatMap(({ kind, by, correlation }) => {
    if (kind === 'matrix') return [['region']];
    const tied = (by ?? (correlation as Said | undefined)?.['by']) as Column | undefined;
    return tied === undefined ? [] : [tied];
  });
}

const model = [0.95, 0.95, 0.8, 0.999].map((level) => ({ kind: 'model', level }));
const robust = ['HC0', 'HC1', 'HC2', 'HC3', 'HC4'].map((correction) => ({ kind: 'robust', correction }));
const clustered = (by: Column): Said[] => [
  ...['CR0', 'CR1', 'CR2', 'CR3'].map((correction) => ({ kind: 'clustered', correction, by })),
  { kind: 'wild', by, replications: 99 },
  { kind: 'wild', by, replications: 99, seed: 5 },
];
const twoWays: Said[] = [
  { kind: 'clustered', correction: 'CR1', by: ['region'], alsoBy: ['year'] },
  { kind: 'clustered', correction: 'CR0', by: ['kind'], alsoBy: ['year'] },
];
const rooted = [{ kind: 'kenward-roger' }, { kind: 'kenward-roger', level: 0.8 }];

const isGivenAndBetween = ({ parts }: Parts) =>
  parts.length === 2 && /^(given|matrix),between$/.test(parts.map(({ kind }) => kind).join());

/** Kinds whose variances are linear in their parameters. */
const isLinear = ({ parts, fixed }: Parts) =>
  parts.every(({ kind, exponent, correlation }) => {
    const serial = (correlation as Said | undefined)?.['kind'] === 'serial';
    return kind !== 'log-linear' && !(exponent === 'estimate' && !('delta' in fixed)) && !serial;
  });

/** An inference that suits the parts; now and then any. */
function inferenceOf(parts: Parts, { pick, chance }: Dice): Said {
  const any = [...model, ...robust, ...clustered(['region']), ...clustered(['kind']), ...twoWays, ...rooted];
  if (chance(0.1)) return pick([...any, { kind: 'knapp-hartung' }]);
  if (chance(0.3)) return pick(model);
  if (isGivenAndBetween(parts) && chance(0.5)) return { kind: 'knapp-hartung', floor: chance(0.5) };
  if (parts.parts.length > 1 && isLinear(parts) && chance(0.5)) return pick(rooted);
  const [first, ...others] = tiesOf(parts);
  if (first === undefined)
    return pick([
      ...robust,
      ...robust,
      ...clustered(['region']),
      ...clustered(['zone']),
      ...clustered(['region', 'year']),
      ...twoWays,
    ]);
  const wide = [first, ...others].some(([by]) => by === 'zone') ? ['zone'] : first;
  return wide.length === 0 || others.some(([by]) => by === 'year') ? pick(model) : pick(clustered(wide));
}

const rivals: readonly unknown[] = [
  'constant',
  'per-size',
  'given',
  { parts: [{ kind: 'per-size' }, { kind: 'between' }] },
  {
    parts: [
      { kind: 'given', scale: 'fixed' },
      { kind: 'shared', by: ['region'] },
    ],
  },
  { parts: [{ kind: 'matrix', file: 'square.csv', scale: 'free' }] },
  { parts: [{ kind: 'per-class', column: 'kind' }] },
  { parts: [{ kind: 'log-linear', terms: [{ column: 'z' }] }] },
  { parts: [{ kind: 'constant', correlation: { kind: 'exchangeable', by: ['region'] } }] },
  { parts: [{ kind: 'size-power', exponent: 'estimate' }] },
  { parts: [{ kind: 'per-size', correlation: { kind: 'serial', by: ['region'], order: 'year' } }] },
];

function questionsOf(columns: readonly Said[], intercept: boolean): Said[] {
  const plain = columns.length > 0 && columns.every((term) => term['column'] === 'x' || term['column'] === 'w');
  if (!plain) return [];
  const where = { x: 1, w: 0.5 };
  const own = Object.fromEntries(columns.map(({ column }) => [column as string, where[column as 'x' | 'w']]));
  const zero = Object.fromEntries(columns.map(({ column }) => [column as string, 0]));
  return [
    {
      kind: 'joint',
      terms: [...(intercept ? ['intercept'] : []), ...columns.map(({ column }) => column)],
      family: 'a',
    },
    { kind: 'combination', of: { x: 2 }, equals: 1, family: 'a' },
    { kind: 'expect', where: own, size: 10, error: 1 },
    { kind: 'expect', where: own },
    { kind: 'average', of: [{ where: own, share: 1 }], minus: [{ where: zero, share: 1 }] },
  ];
}

interface Outcomes {
  readonly roles: Said;
  readonly outcomeScale?: string;
  readonly counted?: Said | null;
  readonly more?: Said;
}

const roles = { label: ['region', 'year'], outcome: 'y', size: 'n', error: 'se' };
const ofCounts = { ...roles, outcome: null, count: 'count' };
const ofRates = { ...ofCounts, exposure: 'exposure', per: 1000 };
const binomial = (scale: string) => ({ kind: 'binomial', scale });
const counts = (scale: string) => ({ kind: 'counts', scale });

/** Means most of the time; else counts, rates and percentages on every scale that is offered for them. */
function outcomesOf({ pick, chance }: Dice): Outcomes {
  if (chance(0.55))
    return pick<Outcomes>([
      { roles },
      { roles },
      { roles: { ...roles, designEffect: 'deff' } },
      { roles: { ...roles, withinSd: 'sd' } },
      { roles: { ...roles, errorKind: 'variance' } },
      { roles: { ...roles, errorKind: 'cv' } },
      { roles, outcomeScale: 'log' },
    ]);
  const scale = pick(['fixed', 'free']);
  const half = pick(['no', 'extreme-cells', 'all-cells']);
  return pick<Outcomes>([
    { roles: ofCounts },
    { roles: ofRates },
    { roles: ofCounts, counted: binomial(scale) },
    { roles: { ...roles, outcome: 'percent', outcomeUnit: 'percent' }, counted: binomial(scale) },
    { roles: ofCounts, counted: binomial(scale), outcomeScale: 'logit', more: { addedHalf: half } },
    { roles: ofCounts, counted: binomial(scale), outcomeScale: 'logit', more: { addedHalf: half } },
    { roles: ofCounts, counted: binomial(scale), outcomeScale: 'logit', more: { estimate: { method: 'full' } } },
    { roles: ofCounts, counted: binomial(scale), outcomeScale: 'log', more: { estimate: { method: 'full' } } },
    { roles: { ...roles, outcome: 'percent', outcomeUnit: 'percent' }, outcomeScale: 'logit' },
    { roles: ofRates, counted: counts(scale) },
    { roles: ofRates, counted: counts(scale), outcomeScale: 'log' },
    { roles: ofRates, counted: counts(scale), outcomeScale: 'log' },
  ]);
}

function methodOf(parts: Parts, inference: Said, { pick, chance }: Dice): Said {
  if (chance(0.03)) return { estimate: { method: 'least-squares' } };
  if (inference['kind'] === 'kenward-roger') return chance(0.95) ? { estimate: { method: 'restricted' } } : {};
  if (isGivenAndBetween(parts) && chance(0.6))
    return { estimate: { method: 'moments', rule: pick(['dersimonian-laird', 'paule-mandel', 'hanushek']) } };
  return chance(0.5) ? {} : { estimate: { method: pick(['full', 'restricted', 'two-step']) } };
}

/** A plan over the whole contract, from its seed alone: most can be answered. */
export function drawnPlan(seed: number): Drawn {
  const dice = diceOf(seed);
  const { pick, chance } = dice;
  const table = tableOf(dice);
  const outcomes = outcomesOf(dice);
  const linked = outcomes.counted !== undefined && (outcomes.outcomeScale ?? 'identity') !== 'identity';
  const alone = linked && (outcomes.more?.['estimate'] !== undefined || outcomes.outcomeScale === 'log');
  const structure = alone ? { parts: [outcomes.counted as Said], fixed: {} } : partsOf(dice, outcomes.counted ?? null);
  const columns = pick(terms);
  const intercept = columns.length === 0 || chance(0.9);
  const inference = inferenceOf(structure, dice);
  const limits =
    outcomes.roles === roles && chance(0.15)
      ? pick([{ n: { rounding: 2 } }, { y: { rounding: 0.5 } }, { x: { rounding: 0.1 } }])
      : {};
  const said = {
    roles: outcomes.roles,
    outcomeScale: outcomes.outcomeScale ?? 'identity',
    terms: columns,
    intercept,
    variance: structure,
    inference,
    ...(alone ? { estimate: { method: 'full' } } : methodOf(structure, inference, dice)),
    ...outcomes.more,
    target: pick([
      'structure',
      'structure',
      'structure',
      'persons',
      'cells',
      'diagonal',
      { parts: [{ kind: 'per-size' }] },
      { parts: [{ kind: 'given', scale: 'fixed' }, { kind: 'between' }] },
    ]),
    beside: chance(0.5) ? [] : [pick(rivals), ...(chance(0.5) ? [pick(rivals)] : [])],
    questions: questionsOf(columns, intercept),
    matters:
      columns.some((term) => term['column'] === 'x' && Object.keys(term).length === 1) && chance(0.3) ? { x: 0.1 } : {},
    data: { limits, sizeWithin: Object.keys(limits).length === 0 && chance(0.08) ? 2 : null },
  };
  // What a target, or an inference, does not go with is tried now and then, not most of the time.
  const own = ['knapp-hartung', 'kenward-roger'].includes(inference['kind'] as string) || linked;
  const target = own && chance(0.9) ? 'structure' : said.target;
  return { columns: table, said: { ...said, target }, files: { 'square.csv': matrixOf(table, dice) } };
}
