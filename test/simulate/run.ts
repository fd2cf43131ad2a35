// `npm run simulate`: coverage of 95 % intervals and size of tests, by seeded draws; prints two tables. Core is bundled as the program bundles it.
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { build } from 'vite';

const root = resolve(import.meta.dirname, '../..');
const bundle = mkdtempSync(join(tmpdir(), 'steelyard-simulate-'));
await build({
  configFile: false,
  logLevel: 'warn',
  resolve: { alias: { '@core': join(root, 'src-core'), '@main': join(root, 'src-main') } },
  build: {
    ssr: true,
    outDir: bundle,
    emptyOutDir: true,
    rolldownOptions: { input: { simulated: join(root, 'test/simulate/simulated.ts') } },
  },
  ssr: { noExternal: true },
});
const { printAll } = (await import(
  pathToFileURL(join(bundle, 'simulated.js')).href
)) as typeof import('./simulated.ts');
// A share of the draws, for a look in seconds: `npm run simulate -- 0.1`.
printAll(Number(process.argv[2] ?? 1), (line) => console.log(line));
rmSync(bundle, { recursive: true, force: true });
