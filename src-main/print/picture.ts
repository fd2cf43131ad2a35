import type { Figure } from '@core/protocol/figure';
import { exact } from '@core/words/numbers';
import type { EChartsOption } from 'echarts';
import { openPdf } from './pdf';
import { measureWith } from './pen';
import { ACCENT, INK, PALE } from './sheet';

/** The family by which a picture names its face; print maps it to the embedded font, other readers have DejaVu or their own. */
const FAMILY = "'DejaVu Sans Condensed', 'DejaVu Sans', sans-serif";
const TEXT = 7.4;
const LABEL = { color: INK, fontSize: 7, fontFamily: FAMILY };
/** Ticks fall on decimal numbers; what the last digits of a double add to them is dropped. */
const tick = (value: number) => exact(Number(value.toPrecision(12)));
const AXIS = {
  nameGap: 8,
  axisLine: { show: true, lineStyle: { color: INK, width: 0.6 } },
  axisTick: { show: true, length: 3, lineStyle: { color: INK, width: 0.6 } },
  minorTick: { show: false },
  axisLabel: { color: INK, fontSize: TEXT, fontFamily: FAMILY, margin: 5 },
  nameTextStyle: { color: INK, fontSize: TEXT, fontFamily: FAMILY },
  splitLine: { show: false, lineStyle: { color: '#dcd8d0', width: 0.4 } },
};

const NUMBERS = { ...AXIS, axisLabel: { ...AXIS.axisLabel, formatter: tick } };

/** What a figure leaves open is set as on the page around it: thin lines, one ink, small type. */
const THEME = {
  color: [INK, ACCENT, PALE, '#2f5d62', '#7a6a2b', '#4b3f72'],
  backgroundColor: 'transparent',
  textStyle: { color: INK, fontSize: TEXT, fontFamily: FAMILY },
  valueAxis: NUMBERS,
  logAxis: NUMBERS,
  categoryAxis: AXIS,
  line: { symbol: 'none', symbolSize: 4, lineStyle: { width: 1 }, label: LABEL, endLabel: LABEL },
  scatter: { symbolSize: 4, label: LABEL, itemStyle: { opacity: 1 } },
  bar: { label: LABEL },
};

const charts = loadOnce(async () => {
  const [{ init, setPlatformAPI }, pdf] = await Promise.all([import('./chart-library'), openPdf()]);
  const { widthOf } = measureWith(pdf);
  const known = new Map<string, number>();
  setPlatformAPI({
    measureText: (text, font = '') => {
      const size = Number(/([\d.]+)px/.exec(font)?.[1] ?? TEXT);
      const face = /\bbold\b|\b[6-9]00\b/.test(font) ? 'plain-strong' : 'plain';
      const key = `${face} ${text}`;
      let unit = known.get(key);
      if (unit === undefined) {
        if (known.size > 5000) known.clear();
        unit = widthOf(text, { face, size: 1, leading: 1, ink: INK });
        known.set(key, unit);
      }
      return { width: unit * size };
    },
  });
  return init;
});

/**
 * Draws a figure as SVG, one unit a point, text as text.
 *
 * The same figure gives the same bytes however many were drawn before it; nothing in it reacts to a pointer.
 */
export async function figureSvg(figure: Figure): Promise<string> {
  const init = await charts();
  const chart = init(null, THEME, { renderer: 'svg', ssr: true, width: figure.width, height: figure.height });
  try {
    // FigureOption is a subset of the library's own type, but for read-only arrays (test/print/picture.test.ts checks that).
    chart.setOption(figure.option as unknown as EChartsOption);
    return settle(chart.renderToSVGString(), figure.id);
  } finally {
    chart.dispose();
  }
}

/** Takes away what counts charts or reacts to a pointer, and the white outlines of labels, which would be drawn over their letters. */
function settle(svg: string, id: string): string {
  const name = id.replace(/[^A-Za-z0-9_-]/g, '-');
  return svg
    .replace(/<style\s*>[\s\S]*?<\/style>\s*/g, '')
    .replace(/ (?:class|ecmeta_\w+|pointer-events)="[^"]*"/g, '')
    .replace(/\bzr\d+-/g, `${name}-`)
    .replace(/<text\b[^>]*>/g, (tag) => tag.replace(/ (?:stroke(?:-[a-z]+)?|paint-order)="[^"]*"/g, ''));
}

function loadOnce<T>(load: () => Promise<T>): () => Promise<T> {
  let loaded: Promise<T> | undefined;
  return () => (loaded ??= load());
}
