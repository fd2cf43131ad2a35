import type { Block, Cell, ReportDocument, Table } from '@core/protocol/document';
import type { Figure, FigureSeries } from '@core/protocol/figure';

/** Hand-made documents for the printer alone: their words and numbers mean nothing. */

const NUMERALS = ['zero', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine'];

export const PROSE =
  'The error variance of each mean is the square of its supplied standard error plus a part that is the same for every cell. ' +
  'Cells are taken as independent; that was looked at by region and not contradicted. In a cell of median size the first part ' +
  'makes up 35 % of the whole, and the coefficient ran from 0.61 to 0.94 over the structures that were tried.';

export const GREEK =
  'β̂ = (XᵀΩ⁻¹X)⁻¹XᵀΩ⁻¹y, where Ω = σ²·diag(1/n₁, …, 1/n_G) + τ²·I; χ² ≥ 3.84, η² ≤ 1, ∑ √x ≠ ∞, x̄ ± 2, ŷ ≈ −0.5';

export function reportOf(blocks: readonly Block[], more: Partial<ReportDocument> = {}): ReportDocument {
  return {
    language: 'en',
    title: 'A sample <of> every & block',
    subject: 'Layout',
    author: null,
    paper: 'A4',
    foot: { left: 'Sample plan', right: 'Steelyard 0.1.0', pageOf: 'page {n} of {m}' },
    blocks,
    ...more,
  };
}

export function cell(value: number | string): Cell {
  return { value, text: typeof value === 'number' ? value.toFixed(2).replace('-', '−') : value };
}

export function tableOf(rows: number, more: Partial<Table> = {}): Table {
  return {
    caption: 'Cells used, with what each supplies',
    head: [
      { text: 'Cell', align: 'left', breadth: 2 },
      { text: 'Size', align: 'right' },
      { text: 'Mean', align: 'right' },
      { text: 'Standard error', align: 'right' },
      { text: '95 % interval', align: 'right' },
    ],
    rows: Array.from({ length: rows }, (_, r) => [
      cell(`Cell ${NUMERALS[r % 10]} of block ${Math.floor(r / 10) + 1}`),
      { value: 40 + ((r * 37) % 900), text: `${40 + ((r * 37) % 900)}` },
      cell(((r * 7919) % 2000) / 100 - 10),
      cell(0.2 + ((r * 31) % 100) / 100),
      cell(`${((r % 17) / 10).toFixed(2)} to ${((r % 23) / 10 + 2).toFixed(2)}`),
    ]),
    ...more,
  };
}

/** 12 columns under heads of several words, and names of many words, some longer than any line. */
export function wideTable(rows: number, columns = 12): Table {
  const longName = (r: number) =>
    r % 9 === 4
      ? `Unbreakable_name_of_an_administrative_area_without_any_space_${r}_${'x'.repeat(40)}`
      : `Households with ${NUMERALS[r % 10]} or more dependent children in rented dwellings of the outer districts, north of the river (block ${r + 1})`;
  return {
    caption: 'Every cell under every structure that was tried, with residuals and leverages of each',
    head: [
      { text: 'Cell', align: 'left', breadth: 3 },
      ...Array.from({ length: columns - 1 }, (_, c) => ({
        text: ['Group size', 'Standard error supplied', 'Whitened residual', 'Leverage'][c % 4] as string,
        align: 'right' as const,
      })),
    ],
    rows: Array.from({ length: rows }, (_, r) => [
      cell(longName(r)),
      ...Array.from({ length: columns - 1 }, (_, c) => cell(((r + 1) * (c + 3) * 7.31) % 1000)),
    ]),
    note: 'Residuals are whitened by the structure that was accepted. A leverage near 1 means that the cell is fitted by its own coefficient.',
  };
}

const GRID = { left: 40, right: 16, top: 14, bottom: 30 };
const NO_DATA: Table = { caption: '', head: [], rows: [] };

export function figureOf(series: readonly FigureSeries[], more: Partial<Figure> = {}): Figure {
  return {
    id: 'sample',
    caption: 'Whitened residuals against size, with the curve of each candidate',
    alt: 'A cloud of points without a trend, and three curves that fall from left to right.',
    width: 338,
    height: 190,
    option: {
      animation: false,
      grid: GRID,
      xAxis: { type: 'value', name: 'size', nameLocation: 'middle', nameGap: 18 },
      yAxis: { type: 'value', name: 'residual of β̂ (squared)', nameLocation: 'middle', nameGap: 24 },
      series,
    },
    data: NO_DATA,
    ...more,
  };
}

/** Three line patterns with labels at their ends, on logarithmic axes. */
export const patterns: Figure = figureOf([], {
  id: 'patterns',
  option: {
    animation: false,
    grid: { ...GRID, right: 90 },
    xAxis: { type: 'log', name: 'respondents', nameLocation: 'middle', nameGap: 18, min: 1, max: 1000 },
    yAxis: { type: 'log', name: 'error variance σ²', min: 0.01, max: 10, splitLine: { show: true } },
    series: (['solid', 'dashed', 'dotted', [6, 2, 1, 2]] as const).map((type, i) => ({
      type: 'line',
      symbol: 'none',
      data: [1, 3, 10, 30, 100, 300, 1000].map((n) => [n, (8 - 1.5 * i) / n ** (0.4 + 0.15 * i)]),
      lineStyle: { type, width: 1, opacity: 1 - 0.2 * i },
      endLabel: { show: true, formatter: ['by size', 'square root', 'between cells', 'equal'][i] as string },
    })),
    graphic: [{ type: 'text', left: 52, top: 20, style: { text: 'τ² ≥ 0, β̂ ± 1.96·se', fontSize: 7 } }],
  },
});

export const cloud = (points: number): Figure =>
  figureOf(
    [
      {
        type: 'scatter',
        symbol: 'circle',
        symbolSize: 2.4,
        itemStyle: { opacity: 0.5 },
        data: Array.from({ length: points }, (_, i) => [(i * 7919) % 1000, ((i * 104729) % 2003) / 300 - 3.3]),
      },
      {
        type: 'line',
        symbol: 'none',
        data: [
          [0, 0],
          [1000, 0],
        ],
        lineStyle: { type: 'dashed', width: 0.7 },
      },
    ],
    { id: `cloud-${points}` },
  );

/** Bars beside names, an area, steps, and points with their names. */
export const bars: Figure = figureOf([], {
  id: 'bars',
  height: 220,
  option: {
    animation: false,
    grid: [
      { left: 90, right: 180, top: 14, bottom: 30 },
      { left: 200, right: 20, top: 14, bottom: 30 },
    ],
    xAxis: [
      { type: 'value', name: 'share of the pull', nameLocation: 'middle', nameGap: 18, gridIndex: 0 },
      { type: 'value', name: 'exponent', nameLocation: 'middle', nameGap: 18, gridIndex: 1 },
    ],
    yAxis: [
      { type: 'category', data: ['Northern coast', 'Lake district', 'Old town'], inverse: true, gridIndex: 0 },
      { type: 'value', gridIndex: 1 },
    ],
    series: [
      {
        type: 'bar',
        barWidth: 9,
        data: [
          [0.4, 'Northern coast'],
          [0.25, 'Lake district'],
          [0.1, 'Old town'],
        ],
      },
      {
        type: 'line',
        step: 'end',
        symbol: 'diamond',
        symbolSize: 5,
        areaStyle: { opacity: 0.15 },
        data: [[0, 1], [1, 2], { value: [2, 1.5], label: { show: true, position: 'top', formatter: 'cell A' } }],
        xAxisIndex: 1,
        yAxisIndex: 1,
      },
    ],
  },
});

const notes = (count: number, words: number) =>
  Array.from({ length: count }, (_, i) => ({
    about: `design effect ${i + 1}`,
    text: `${'The variance of a mean under the design over that of a simple random sample of the same size. '.repeat(words)}Source: Kish 1965.`,
  }));

/** One of each kind of block, on two pages or three. */
export const everyBlock: ReportDocument = reportOf([
  { kind: 'heading', level: 1, text: 'Does income go with trust? A sample of every block' },
  { kind: 'paragraph', role: 'lead', text: PROSE, margin: notes(1, 1) },
  { kind: 'heading', level: 2, text: 'The variance statement' },
  { kind: 'paragraph', role: 'plain', text: PROSE },
  { kind: 'equation', text: GREEK, spoken: 'beta hat is the weighted least squares estimate', margin: notes(1, 2) },
  { kind: 'paragraph', role: 'plain', text: PROSE },
  { kind: 'heading', level: 3, text: 'What to watch' },
  {
    kind: 'caution',
    group: 'Heavy cells',
    text: 'Six of 120 cells carry half the total pull on income. Refit without them.',
  },
  { kind: 'caution', group: 'Heavy cells', text: 'One cell is fitted by its own coefficient.', margin: notes(1, 1) },
  { kind: 'caution', group: 'Supplied errors', text: PROSE },
  { kind: 'list', items: ['A short point.', PROSE, 'Another short point, and the last.'] },
  { kind: 'table', table: tableOf(3, { note: 'Intervals by the normal distribution.' }), margin: notes(1, 1) },
  { kind: 'figure', figure: patterns, margin: notes(1, 1) },
  { kind: 'paragraph', role: 'small', text: PROSE },
  { kind: 'page-break' },
  { kind: 'heading', level: 2, text: 'Appendix' },
  { kind: 'figure', figure: cloud(150) },
  { kind: 'figure', figure: bars },
]);

export const longTable = (rows: number) =>
  reportOf([
    { kind: 'heading', level: 2, text: 'All cells' },
    { kind: 'table', table: tableOf(rows), margin: notes(1, 1) },
    { kind: 'paragraph', role: 'plain', text: 'After the table.' },
  ]);

export const wideTables: ReportDocument = reportOf([
  { kind: 'heading', level: 2, text: 'Wide tables' },
  { kind: 'paragraph', role: 'plain', text: PROSE, margin: notes(1, 4) },
  { kind: 'table', table: wideTable(60), margin: notes(1, 1) },
  { kind: 'paragraph', role: 'plain', text: PROSE },
  { kind: 'table', table: wideTable(6, 26) },
  { kind: 'table', table: wideTable(6, 7) },
]);

export const awkward: ReportDocument = reportOf(
  [
    { kind: 'heading', level: 1, text: `Words too long for a line: ${'Donaudampfschifffahrtsgesellschaft'.repeat(4)}` },
    {
      kind: 'paragraph',
      role: 'plain',
      text: `${PROSE} ${'https://example.org/a/very/long/path/'.repeat(6)} ${'w'.repeat(300)} end.`,
    },
    { kind: 'paragraph', role: 'plain', text: `${GREEK} 東京 Ḧ ע ${'\u{1d437}'} Łódź, Ærø, İzmir, Ñuñoa, Ђаково` },
    { kind: 'equation', text: 'Var(ȳ_g) = σ²/n_g + τ²', spoken: 'the variance of a mean' },
    { kind: 'paragraph', role: 'plain', text: 'Tab\there, control\u0007 here.\nA second line.\r\nA third.' },
    { kind: 'table', table: { caption: '', head: [{ text: 'Alone', align: 'left' }], rows: [] } },
    {
      kind: 'table',
      table: tableOf(1, {
        caption: 'One row whose name fills more than a page',
        rows: [[cell(PROSE.repeat(40)), cell(1), cell(2), cell(3), cell('')]],
      }),
    },
    {
      kind: 'figure',
      figure: figureOf(
        [
          {
            type: 'line',
            data: [
              [0, 1],
              [1, 2],
            ],
          },
        ],
        { id: 'tall', width: 700, height: 1200 },
      ),
      margin: notes(1, 1),
    },
  ],
  { foot: { left: PROSE, right: 'Steelyard 0.1.0' }, author: 'A. Person', paper: 'Letter' },
);

/** Notes longer than their blocks, one on another, and over the foot of the page. */
export const crowdedMargin: ReportDocument = reportOf(
  Array.from(
    { length: 12 },
    (_, i): Block => ({
      kind: 'paragraph',
      role: 'plain',
      text: i % 3 === 0 ? PROSE : 'A short one.',
      margin: notes(1 + (i % 2), 2 + (i % 4)),
    }),
  ),
);

/** Ten pages with five figures: what a report is like. */
export const tenPages: ReportDocument = reportOf(
  Array.from({ length: 5 }, (_, i): Block[] => [
    { kind: 'heading', level: 2, text: `Section ${NUMERALS[i + 1]}` },
    ...Array.from(
      { length: 5 },
      (): Block => ({ kind: 'paragraph', role: 'plain', text: PROSE.repeat(2), margin: notes(1, 1) }),
    ),
    { kind: 'table', table: tableOf(30) },
    { kind: 'figure', figure: { ...(i % 2 === 0 ? patterns : cloud(200)), id: `figure-${i}` } },
    { kind: 'list', items: [PROSE, PROSE, PROSE] },
  ]).flat(),
);
