import { type Coverage, coverageOf } from './coverage';
import { scenarios } from './scenarios';
import { sizesOfTests } from './test-sizes';

/** Cells of a table, and how often errors are drawn for it: one standard deviation of a share near 95 % is about half of one per cent. */
const sizes = [
  { cells: 20, draws: 1600 },
  { cells: 60, draws: 1600 },
  { cells: 200, draws: 800 },
] as const;

const SEED = 20260301;
/** What 95 % intervals should cover under their own assumptions. */
const low = 0.93;
const high = 0.97;

/** Prints coverage and sizes line by line; share: of the full number of draws. */
export function printAll(share: number, print: (line: string) => void): void {
  const drawn = (draws: number) => Math.max(20, Math.round(draws * share));
  const head = sizes.map(({ cells }) => `G = ${cells}: x, z, joint`.padEnd(26)).join('');
  print(`Coverage of 95 % intervals (joint: 1 less the size of the 5 % test), in per cent; * outside 93 to 97`);
  for (const own of [true, false]) {
    print(`\n${(own ? 'under their own assumptions' : 'where they do not hold').padEnd(48)}${head}`);
    for (const scenario of scenarios.filter((one) => one.own === own)) {
      const figures = sizes.map(({ cells, draws }) =>
        told(coverageOf(scenario, { cells, draws: drawn(draws * (scenario.share ?? 1)), seed: SEED + cells })).padEnd(
          26,
        ),
      );
      print(`${scenario.name.padEnd(48)}${figures.join('')}${scenario.from ? `from G = ${scenario.from}` : ''}`);
    }
  }
  print(`\nSize of the 5 % tests of the structure, in per cent, where the structure holds`);
  for (const line of sizesOfTests({
    sizes: sizes.map(({ cells, draws }) => ({ cells, draws: drawn(draws) })),
    seed: SEED,
  }))
    print(line);
}

function told({ x, z, joint, undefined: none }: Coverage): string {
  const mark = (value: number) => `${(100 * value).toFixed(1)}${value < low || value > high ? '*' : ' '}`;
  return `${mark(x)} ${mark(z)} ${mark(joint)}${none > 0 ? ` (${none} without)` : ''}`;
}
