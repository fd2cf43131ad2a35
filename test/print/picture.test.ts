import type { FigureOption } from '@core/protocol/figure';
import { openPdf } from '@main/print/pdf';
import { figureSvg } from '@main/print/picture';
import { partTexts } from '@main/print/picture-text';
import type { EChartsOption } from 'echarts';
import { format } from 'echarts/core';
import { describe, expect, it } from 'vitest';
import { bars, cloud, figureOf, patterns } from './samples';

type Writable<T> = T extends object ? { -readonly [K in keyof T]: Writable<T[K]> } : T;

/** Does not compile where a figure could say what the chart library does not take. */
const taken = (option: Writable<FigureOption>): EChartsOption => option;
// @ts-expect-error: the library's type is not one that takes everything
const refused: EChartsOption = { series: [{ type: 'line', step: 'sideways' }] };

describe('a figure drawn as SVG', () => {
  it('is what the chart library takes, by type', () => {
    expect(taken(patterns.option as Writable<FigureOption>)).toBe(patterns.option);
    expect(refused).toBeDefined();
  });

  it('has the same bytes each time, whatever was drawn between', async () => {
    const first = await figureSvg(patterns);
    await figureSvg(bars);
    expect(await figureSvg(patterns)).toBe(first);
  });

  it('has its size in points, and reacts to nothing', async () => {
    const svg = await figureSvg(bars);
    expect(svg).toMatch(/^<svg width="338" height="220"/);
    expect(svg).not.toMatch(/<style|class=|hover|ecmeta|zr\d|<script|href=/);
  });

  it('keeps line patterns, opacity and every label as text', async () => {
    const svg = await figureSvg(patterns);
    expect(svg).toContain('stroke-dasharray="6,2,1,2"');
    expect(svg).toContain('stroke-opacity="0.8"');
    for (const label of ['by size', 'between cells', 'error variance σ²', 'τ² ≥ 0, β̂ ± 1.96·se', '0.01', '1000'])
      expect(svg).toContain(`>${label}</text>`);
  });

  it('writes the numbers of its axes as the report does', async () => {
    const line = figureOf([
      {
        type: 'line',
        data: [
          [-20000, -0.3],
          [20000, 0.3],
        ],
      },
    ]);
    const labels = partTexts(await figureSvg(line)).texts.map((text) => text.text);
    expect(labels).toEqual(expect.arrayContaining(['−20\u202f000', '20\u202f000', '−0.3', '0.3', '0']));
  });

  it('is laid out by the widths of the font with which it is printed', async () => {
    await figureSvg(patterns);
    const pdf = await openPdf();
    for (const text of ['WWWW', 'iiii', 'Households of the outer districts', 'σ² ≥ 0']) {
      const laid = format.getTextRect(text, '10px sans-serif').width;
      expect(Math.abs(laid - pdf.font('plain', 10).widthOfString(text))).toBeLessThan(1e-9);
    }
  });

  it('draws every point', async () => {
    const svg = await figureSvg(cloud(500));
    expect(svg.match(/<path d="M1 0A1 1/g)).toHaveLength(500);
  });
});

describe('the texts of a picture', () => {
  it('are parted from its shapes with place, size, ink and turn', () => {
    const { shapes, texts } = partTexts(
      '<svg><path d="M0 0"/><text dominant-baseline="central" text-anchor="end" style="font-size:10px;font-weight:bold" ' +
        'y="5" transform="matrix(0,-1,1,0,12,80)" fill="rgb(255,0,10)" fill-opacity="0.5">a &lt; b &amp;amp; c</text></svg>',
    );
    expect(shapes).toBe('<svg><path d="M0 0"/></svg>');
    expect(texts).toEqual([
      {
        text: 'a < b &amp; c',
        style: { face: 'plain-strong', size: 10, leading: 10, ink: '#ff000a' },
        opacity: 0.5,
        at: 'end',
        x: 0,
        y: 8.6,
        matrix: [0, -1, 1, 0, 12, 80],
      },
    ]);
  });
});
