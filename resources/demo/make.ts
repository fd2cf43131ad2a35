// Makes the demo's two files from a seed: `node resources/demo/make.ts FOLDER`. The scenario is invented: no such parishes, centres or survey.
//
// True model, for a parish and year g with n_g carers asked:
//   hours_g = 10 + 0.30 distance_g + 0.15 older_g - 0.80 places_g + between_g + within_g,
//   between_g ~ N(0, 1.3^2): what sets a parish and year apart beyond its covariates,
//   within_g ~ N(0, 8^2 / n_g): the sampling of n_g carers.
import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

const SEED = 52;

const parishes = [
  'Arlow Green',
  'Brackwater',
  'Coldermoss',
  'Dunfallow',
  'Eastrefen',
  'Fallowhythe',
  'Garrowend',
  'Hollinbeck',
  'Ivelmarch',
  'Juddersley',
  'Kettlecombe',
  'Lowmarrow',
  'Millrush',
  'Nethergale',
  'Oxlith',
  'Pellhaven',
  'Quarlow',
  'Rushenby',
  'Saltenor',
  'Thornevale',
  'Ullenby',
];
const years = [2023, 2024, 2025];

/** Uniform numbers above 0 and below 1: a 32-bit counter, mixed. */
function uniformFrom(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return (((mixed ^ (mixed >>> 14)) >>> 0) + 0.5) / 4294967296;
  };
}

const uniform = uniformFrom(SEED);
const normal = () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());

/** The two files as text. */
export function demoFiles(): { care: string; places: string } {
  const care = ['parish,year,carers,mean_hours,distance_km,older_percent'];
  const places = ['parish,year,places_per_1000'];
  for (const parish of parishes) {
    const typical = Math.exp(4.1 + 1.25 * normal());
    const distance = 1 + 14 * uniform();
    const older = 6 + 12 * uniform();
    const start = 1 + 5 * uniform();
    for (const year of years) {
      const asked = Math.min(1040, Math.max(4, Math.round(typical * Math.exp(0.3 * normal()))));
      const share = older + 0.3 * (year - 2023) + 0.4 * normal();
      const offered = Math.max(0.2, start + 0.5 * normal());
      const hours =
        10 + 0.3 * distance + 0.15 * share - 0.8 * offered + 1.3 * normal() + (8 / Math.sqrt(asked)) * normal();
      const shown = asked < 8 ? 'c' : parish === 'Quarlow' && year === 2023 ? '..' : hours.toFixed(2);
      care.push([parish, year, asked, shown, distance.toFixed(1), share.toFixed(1)].join(','));
      // The register of day centres has no entry for one parish in one year.
      if (!(parish === 'Dunfallow' && year === 2025)) places.push([parish, year, offered.toFixed(2)].join(','));
    }
  }
  return { care: `${care.join('\n')}\n`, places: `${places.join('\n')}\n` };
}

if (process.argv[1] === import.meta.filename) {
  const folder = process.argv[2] ?? import.meta.dirname;
  mkdirSync(folder, { recursive: true });
  const { care, places } = demoFiles();
  writeFileSync(join(folder, 'care.csv'), care);
  writeFileSync(join(folder, 'places.csv'), places);
}
