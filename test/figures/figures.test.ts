import { beamFigure } from '@core/figures/beam-figure';
import { concentrationFigure } from '@core/figures/concentration-figure';
import { intervalsBeside } from '@core/figures/intervals-beside';
import { scanFigure } from '@core/figures/scan-figure';
import { squaredResiduals } from '@core/figures/squared-residuals';
import type { Figure } from '@core/protocol/figure';
import type { Result } from '@core/protocol/result';
import { figureSvg } from '@main/print/picture';
import { partTexts } from '@main/print/picture-text';
import { describe, expect, it } from 'vitest';
import { resultOfCase, resultOfTable } from '../report/results';
import { faultsOf } from '../report/walk';

const schools = resultOfCase('schools-between-per-size', 'between-per-size-restricted', {
  beside: ['constant', 'per-size'],
});
const latitude = resultOfCase('bcg-latitude', 'restricted', { beside: ['constant'] });
const makers: [string, (result: Result) => Figure | null][] = [
  ['squared residuals', squaredResiduals],
  ['intervals beside each other', intervalsBeside],
  ['the beam', (result) => beamFigure(result)],
  ['the exponent scan', scanFigure],
  ['the concentration', concentrationFigure],
];

describe('a figure', () => {
  it.each(makers)('of %s is plain data: no function, no number that is none, within its size', (_, make) => {
    const figure = make(schools);
    if (figure === null) throw new Error('no figure');
    expect(faultsOf(figure)).toEqual([]);
    expect(figure.width).toBeLessThanOrEqual(440);
    expect(figure.alt.length).toBeGreaterThan(20);
    expect(figure.data.rows.length).toBeGreaterThan(0);
    for (const row of figure.data.rows) expect(row).toHaveLength(figure.data.head.length);
  });

  it.each(makers)('of %s is drawn with every label inside its frame and readable', async (_, make) => {
    const figure = make(schools) as Figure;
    const { texts } = partTexts(await figureSvg(figure));
    expect(texts.length).toBeGreaterThan(5);
    for (const text of texts) {
      expect(text.style.size).toBeGreaterThanOrEqual(7);
      expect(text.opacity).toBe(1);
      const [x, y] = [text.x + text.matrix[4], text.y + text.matrix[5]];
      expect(x, text.text).toBeGreaterThanOrEqual(-0.5);
      expect(x, text.text).toBeLessThanOrEqual(figure.width);
      expect(y, text.text).toBeGreaterThanOrEqual(0);
      expect(y, text.text).toBeLessThanOrEqual(figure.height);
    }
  });

  it('is left out where there is nothing to draw', () => {
    const full = resultOfTable('a,n,y,x\np,10,1.2,1\nq,50,2.4,4\n', { terms: [{ column: 'x' }], beside: [] });
    expect(squaredResiduals(full)).toBeNull();
    expect(intervalsBeside(full)).toBeNull();
    expect(scanFigure(full)).toBeNull();
    expect(scanFigure(latitude)).toBeNull();
  });

  it('of squared residuals stands against size where variance follows it, else against the stated variance', () => {
    const bySize = squaredResiduals(schools) as Figure;
    const byVariance = squaredResiduals(latitude) as Figure;
    expect(bySize.data.head[1]?.text).toBe('size');
    expect(byVariance.data.head[1]?.text).toBe('stated variance');
    expect(bySize.data.rows.map((row) => row[2]?.value)).toEqual(
      schools.cells.map(({ residual }) => residual * residual),
    );
    expect(byVariance.data.rows.map((row) => row[1]?.value)).toEqual(latitude.cells.map(({ variance }) => variance));
  });

  it('of the beam holds pulls and distances that add up to the coefficient', () => {
    const { data } = beamFigure(latitude) as Figure;
    const sum = data.rows.reduce((total, row) => total + (row[1]?.value as number) * (row[2]?.value as number), 0);
    const slope = latitude.fit.coefficients.find(({ term }) => term === latitude.beam[1]?.term)?.estimate as number;
    expect(Math.abs(sum - slope)).toBeLessThan(1e-12);
  });

  it('of the concentration rises from the heaviest cell to the whole weight', () => {
    const { data } = concentrationFigure(schools) as Figure;
    const shares = data.rows.map((row) => row[1]?.value as number);
    expect(shares[0]).toBe(Math.max(...schools.cells.map(({ weightShare }) => weightShare)));
    expect(shares.at(-1)).toBeCloseTo(1, 12);
    for (const [i, share] of shares.entries()) if (i > 0) expect(share).toBeGreaterThanOrEqual(shares[i - 1] as number);
  });

  it('of the exponent scan draws the chosen coefficients at every exponent, its ink full at the best', () => {
    const { data } = scanFigure(schools) as Figure;
    expect(data.rows).toHaveLength(schools.exponentScan.length);
    expect(Math.max(...data.rows.map((row) => row[1]?.value as number))).toBe(1);
  });
});
