import { openSheet, type Panel } from '@core/figures/panel';
import { movedOption, type PlaneFigure, partOf, planeOf, wholeView } from '@core/figures/plane';
import type { FigureSeries } from '@core/protocol/figure';
import { describe, expect, it } from 'vitest';

const size = { width: 200, height: 100 };
const panel: Panel = {
  left: 20,
  top: 10,
  width: 100,
  height: 80,
  x: { min: 1, max: 100, log: true },
  y: { min: -2, max: 2, log: false },
  xName: 'size',
  yName: 'outcome',
};

/** A figure with a point on its plane, and marks over it: in the frame, at its right, below it. */
function figure(): PlaneFigure {
  const { overlay, series, ...axes } = openSheet(size, [panel]);
  const plane = planeOf(panel, series.length);
  series.push({ type: 'scatter', xAxisIndex: 0, yAxisIndex: 0, data: [[10, 0]] });
  overlay.mark(70, 50, { size: [1, 1] }); // the very middle
  overlay.mark(130, 30, { size: [2, 2] }); // at the right, three quarters up
  overlay.mark(130, 97, { size: [3, 3] }); // below
  const data = { caption: '', head: [], rows: [] };
  return { id: 'x', caption: '', alt: '', ...size, plane, option: { animation: false, ...axes, series }, data };
}

const marked = (series: readonly FigureSeries[], width: number) =>
  series.find(({ symbolSize }) => Array.isArray(symbolSize) && symbolSize[0] === width)?.data[0];

describe('a plane', () => {
  it('as a whole is drawn as it was', () => {
    expect(movedOption(figure(), wholeView)).toEqual(figure().option);
  });

  it('in part has the ends of that part, by factors on a log axis', () => {
    expect(partOf(panel.x, 0.5, 1)).toEqual({ min: expect.closeTo(10, 12), max: 100, log: true });
    expect(partOf(panel.y, 0.25, 0.5)).toEqual({ min: -1, max: 0, log: false });
    expect(partOf(panel.x, 1, 1.5)).toEqual({ min: 100, max: expect.closeTo(1000, 10), log: true });
  });

  it('moves what lies over it along: inside both ways, at its right by height alone, below not at all', () => {
    const { series } = movedOption(figure(), { left: 0.25, right: 0.75, bottom: 0.5, top: 1 });
    expect(marked(series, 1)).toEqual([70, 90]);
    expect(marked(series, 2)).toEqual([130, 50]);
    expect(marked(series, 3)).toEqual([130, 97]);
    expect(series.filter(({ xAxisIndex }) => xAxisIndex === 0)).toEqual([
      { type: 'scatter', xAxisIndex: 0, yAxisIndex: 0, data: [[10, 0]] },
    ]);
  });

  it('leaves out what leaves its frame, and draws its axes anew', () => {
    const { series, xAxis, yAxis } = movedOption(figure(), { left: 0.5, right: 1, bottom: 0, top: 0.5 });
    expect(marked(series, 2)).toBeUndefined();
    expect((xAxis as readonly object[])[0]).toMatchObject({ type: 'log', min: expect.closeTo(10, 12), max: 100 });
    expect((yAxis as readonly object[])[0]).toMatchObject({ min: -2, max: 0 });
    const texts = series.flatMap(({ label }) => (label?.formatter === undefined ? [] : [label.formatter]));
    expect(texts).toEqual(expect.arrayContaining(['10', '100', 'size', 'outcome', '−2', '0']));
    expect(texts).not.toContain('2');
  });
});
