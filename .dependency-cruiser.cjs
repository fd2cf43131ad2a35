/** The ladder of DEVELOPERS.md as rules. Each has a wrong file under test/checks/must-fail that proves it fires. */

const leaves = { protocol: [], words: ['protocol'], numbers: ['protocol'] };
const ladder = ['kernels', 'algebra', 'table', 'model', 'estimate', 'inference', 'evidence'];

/** What each room of core may import besides itself. */
const mayImport = { ...leaves };
for (const [step, room] of ladder.entries()) mayImport[room] = ['protocol', 'numbers', ...ladder.slice(0, step)];
mayImport.survey = ['protocol', 'numbers', 'algebra', 'table'];
mayImport.figures = ['protocol', 'words', 'numbers'];
mayImport.report = ['protocol', 'words', 'numbers', 'figures', ...ladder];

const roomRules = Object.entries(mayImport).map(([room, others]) => ({
  name: `core-${room}-looks-down-the-ladder`,
  severity: 'error',
  from: { path: `^src-core/${room}/` },
  to: { path: '^src-core/', pathNot: `^src-core/(${[room, ...others].join('|')})/` },
}));

/** One room alone imports each of these packages. */
const importers = [
  ['ml-matrix', '^src-core/algebra/'],
  ['valibot', '^src-core/protocol/'],
  ['@stdlib/', '^src-core/numbers/'],
  ['better-sqlite3', '^src-main/project/'],
  ['papaparse', '^src-main/intake/'],
  ['(pdfkit|svg-to-pdfkit)', '^src-main/print/'],
  ['echarts', '^(src-renderer/charts/|src-main/print/)'],
  ['pdfjs-dist', '^src-renderer/screens/report/'],
].map(([packageName, importer]) => ({
  name: `one-importer-of-${packageName
    .replace(/[^a-z0-9-]+/g, ' ')
    .trim()
    .replace(/ /g, '-')}`,
  severity: 'error',
  from: { path: '^src-', pathNot: importer },
  to: { path: `(^|/)node_modules/(@types/)?${packageName}` },
}));

/** @type {import('dependency-cruiser').IConfiguration} */
module.exports = {
  forbidden: [
    { name: 'no-circle', severity: 'error', from: { path: '^src-' }, to: { circular: true } },
    ...roomRules,
    {
      name: 'core-knows-no-machine',
      severity: 'error',
      from: { path: '^src-core' },
      to: { path: ['^src-(main|renderer)', '(^|/)node_modules/(electron|svelte|@types/node)/'] },
    },
    { name: 'core-knows-no-node', severity: 'error', from: { path: '^src-core' }, to: { dependencyTypes: ['core'] } },
    ...importers,
    {
      name: 'main-sees-core-by-its-doors',
      severity: 'error',
      from: { path: '^src-main' },
      to: { path: '^src-core', pathNot: '^src-core/((index|analyse)\\.ts$|protocol/|figures/|words/)' },
    },
    {
      name: 'only-the-engine-analyses',
      severity: 'error',
      from: { path: '^src-(main|renderer)', pathNot: '^src-main/engine/' },
      to: { path: '^src-core/analyse\\.ts$' },
    },
    {
      name: 'doors-never-import-each-other',
      severity: 'error',
      from: { path: '^src-main/(bridge|command)/' },
      to: { path: '^src-main/(bridge|command)/', pathNot: '^src-main/$1/' },
    },
    {
      name: 'rooms-import-no-door',
      severity: 'error',
      from: { path: '^src-main/(project|intake|engine|print)/' },
      to: { path: '^src-main/((bridge|command)/|[^/]+\\.ts$)' },
    },
    {
      name: 'electron-stays-in-the-shell',
      severity: 'error',
      from: { path: '^src-main/(command|project|intake|engine|print)/' },
      to: { path: '(^|/)node_modules/electron/' },
    },
    {
      name: 'preload-is-tiny',
      severity: 'error',
      from: { path: '^src-main/preload\\.ts$' },
      to: { pathNot: ['^src-core/protocol/channels\\.ts$', '(^|/)node_modules/electron/'] },
    },
    {
      name: 'renderer-sees-plain-shapes',
      severity: 'error',
      from: { path: '^src-renderer' },
      to: { path: '^src-core', pathNot: '^src-core/(protocol|figures|words)/' },
    },
    {
      name: 'renderer-never-main',
      severity: 'error',
      from: { path: '^src-renderer' },
      to: { path: ['^src-main', '(^|/)node_modules/(electron|better-sqlite3)/'] },
    },
    {
      name: 'renderer-knows-no-node',
      severity: 'error',
      from: { path: '^src-renderer' },
      to: { dependencyTypes: ['core'] },
    },
    { name: 'main-never-renderer', severity: 'error', from: { path: '^src-main' }, to: { path: '^src-renderer' } },
    // Fonts alone are taken from resources: a figure that is kept carries the letters that it uses.
    {
      name: 'program-never-tests',
      severity: 'error',
      from: { path: '^src-' },
      to: { path: '^(test|resources)/', pathNot: '^resources/fonts/' },
    },
  ],
  options: {
    tsPreCompilationDeps: true,
    tsConfig: { fileName: 'tsconfig.base.json' },
    doNotFollow: { path: 'node_modules' },
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'require', 'node', 'default', 'types', 'svelte'],
    },
  },
};
