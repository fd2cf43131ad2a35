// `npm run demo`: the whole job on the demo's cells, through the built command line.
import { spawnSync } from 'node:child_process';
import { mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join, relative } from 'node:path';

const here = import.meta.dirname;
const out = relative(process.cwd(), join(here, 'out'));
const project = join(out, 'care.steelyard');
const command = join(here, '../../out/main/command.js');

function steelyard(...words: string[]): string {
  const { status, stdout, stderr } = spawnSync(process.execPath, [command, ...words], { encoding: 'utf8' });
  if (status !== 0) {
    process.stderr.write(stderr);
    process.exit(status ?? 1);
  }
  return stdout.trim();
}

interface Coefficients {
  readonly coefficients: readonly { term: string; estimate: number; low: number; high: number }[];
}
interface Found {
  readonly plan: { beside: readonly (string | object)[]; units: Record<string, string> };
  readonly data: { rows: number; used: number };
  readonly fit: Coefficients & { variance: readonly { name: string; estimate: number }[] };
  readonly beside: readonly (Coefficients & {
    price: readonly { term: string; claimedSe: number; actualSe: number }[];
  })[];
}

rmSync(out, { recursive: true, force: true });
mkdirSync(out, { recursive: true });
const plan = join(here, 'plan.json');
steelyard('run', plan, '--out', out);
const edition = steelyard('freeze', plan, '--into', project, '--author', 'Demo analyst');
const checked = steelyard('check', project);

const result = JSON.parse(readFileSync(join(out, 'result.json'), 'utf8')) as Found;
const term = 'places_per_1000';
const of = (fit: Coefficients) => fit.coefficients.find((c) => c.term === term) as Coefficients['coefficients'][number];
const shown = (value: number) => value.toFixed(2).replace('-', '\u2212');
const line = (fit: Coefficients) => `${shown(of(fit).estimate)} (${shown(of(fit).low)} to ${shown(of(fit).high)})`;
const bySize = result.beside[result.plan.beside.indexOf('per-size')] as Found['beside'][number];
const price = bySize.price.find((p) => p.term === term) as { claimedSe: number; actualSe: number };
const tau2 = result.fit.variance.find((v) => v.name === 'tau2')?.estimate ?? 0;

console.log(
  `Question: do carers give fewer hours where day centres offer more places? ${result.data.used} of ${result.data.rows} cells are used.`,
);
console.log(
  `One more place per 1,000 residents goes with ${line(result.fit)} hours per carer and week, sampling and between-cell variance together.`,
);
console.log(
  `Weighted by respondents alone: ${line(bySize)}. Its own error claims ${shown(price.claimedSe)}; it would be ${shown(price.actualSe)} if the fitted structure holds.`,
);
console.log(
  `Between-cell variance ${shown(tau2)} (true value of the invented scenario: 1.69; true effect of a place: \u22120.80).`,
);
console.log(edition.split('\n')[0]);
console.log(checked.split('\n')[0]);
console.log(`Files in ${out}: result.json, report.pdf, cells.csv, care.steelyard`);
