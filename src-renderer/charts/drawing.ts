import type { Figure, FigureOption, FigureSeries } from '@core/protocol/figure';
import { type Dress, dressed, sizeOf } from './dress';
import { type EChartsType, init } from './library';

/** From so many data on a figure is drawn as a raster: as shapes it would be slow. */
const LARGE = 5000;

export interface Look {
  readonly dress: Dress;
  readonly scale: number;
}

/** A figure drawn into an element of the page. */
export function drawnIn(element: HTMLElement, figure: Pick<Figure, 'option'>): EChartsType {
  return init(element, null, { renderer: sizeOf(figure) > LARGE ? 'canvas' : 'svg' });
}

/** Draws a figure's option, or draws it anew. */
export function draw(chart: EChartsType, option: FigureOption, look: Look): void {
  chart.setOption({ ...dressed({ ...option, series: option.series.map(thinned) }, look) }, { notMerge: true });
}

/** A line of more points than a page is wide is drawn through those that show. */
function thinned(series: FigureSeries): FigureSeries {
  return series.type === 'line' && series.data.length > LARGE ? Object.assign({ sampling: 'lttb' }, series) : series;
}

/** The face of a kept figure: the one that it carries, then the same by its own name, then what is as narrow, wherever it is opened. */
const KEPT_FACE = "'Steelyard Note', 'DejaVu Sans Condensed', 'Arial Narrow', 'DejaVu Sans', sans-serif";

/** A figure as a file of its own: black on white at print size, whatever the page looks like. */
export function keptFigure(figure: Figure, kind: 'svg' | 'png'): string {
  const holder = document.createElement('div');
  const scale = kind === 'png' ? 2 : 1;
  const [width, height] = [figure.width * scale, figure.height * scale];
  const chart = init(holder, null, { renderer: kind === 'svg' ? 'svg' : 'canvas', width, height, devicePixelRatio: 2 });
  const dress: Dress = { paper: '#ffffff', ink: '#000000', face: KEPT_FACE };
  draw(chart, figure.option, { dress, scale });
  const text =
    kind === 'svg' ? chart.renderToSVGString() : chart.getDataURL({ type: 'png', backgroundColor: '#ffffff' });
  chart.dispose();
  return text;
}
