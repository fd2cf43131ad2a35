import { readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { demoFiles } from '../../resources/demo/make.ts';
import { scratchFolder, steelyard } from '../command/steelyard';

const demo = resolve('resources/demo');
const { folder, remove } = scratchFolder('demo');

interface Estimate {
  readonly term: string;
  readonly estimate: number;
  readonly low: number;
  readonly high: number;
}

beforeAll(() => {
  const { status, stderr } = steelyard(['run', join(demo, 'plan.json'), '--out', folder]);
  if (status !== 0) throw new Error(stderr);
});
afterAll(remove);

describe('the demo', () => {
  it('has the files that its seeded script makes', () => {
    const { care, places } = demoFiles();
    expect(readFileSync(join(demo, 'care.csv'), 'utf8')).toBe(care);
    expect(readFileSync(join(demo, 'places.csv'), 'utf8')).toBe(places);
  });

  it('shows that weighting by size misleads: its interval claims what the fitted structure does not bear out', () => {
    const { fit, beside, data } = JSON.parse(readFileSync(join(folder, 'result.json'), 'utf8'));
    const of = (coefficients: Estimate[]) => coefficients.find(({ term }) => term === 'places_per_1000') as Estimate;
    const chosen = of(fit.coefficients);
    const bySize = beside[1];
    const price = bySize.price.find(({ term }: { term: string }) => term === 'places_per_1000');
    // The invented scenario's own effect is -0.8.
    expect(chosen.low).toBeLessThan(-0.8);
    expect(chosen.high).toBeGreaterThan(-0.8);
    expect(Math.abs(of(bySize.coefficients).estimate + 0.8)).toBeGreaterThan(5 * Math.abs(chosen.estimate + 0.8));
    expect(price.claimedOverActual).toBeLessThan(0.67);
    expect([data.rows, data.used]).toEqual([63, 56]);
  });

  it('gives the same bytes when it is done again', () => {
    const again = scratchFolder('demo-again');
    const { status } = steelyard(['run', join(demo, 'plan.json'), '--out', again.folder]);
    expect(status).toBe(0);
    for (const name of ['result.json', 'report.pdf', 'cells.csv'])
      expect(readFileSync(join(again.folder, name)).equals(readFileSync(join(folder, name)))).toBe(true);
    again.remove();
  });
});
