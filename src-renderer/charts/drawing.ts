import type { Figure } from '@core/protocol/figure';
import { type Dress, dressed, sizeOf } from './dress';
import { type EChartsType, init } from './library';

/** From so many data on a figure is drawn as a raster that can be moved about: as shapes it would be slow. */
export const LARGE = 5000;

export interface Look {
  readonly dress: Dress;
  readonly scale: number;
}

/** A figure drawn into an element of the page. */
export function drawnIn(element: HTMLElement, figure: Figure): EChartsType {
  return init(element, null, { renderer: sizeOf(figure) > LARGE ? 'canvas' : 'svg' });
}

/** Draws a figure, or draws it anew. */
export function draw(chart: EChartsType, figure: Figure, look: Look): void {
  const zoom = sizeOf(figure) > LARGE ? { dataZoom: [{ type: 'inside', xAxisIndex: 'all', filterMode: 'none' }] } : {};
  chart.setOption({ ...dressed(figure.option, look), ...zoom }, { notMerge: true });
}

/** A figure as a file of its own: black on white at print size, whatever the page looks like. */
export function keptFigure(figure: Figure, kind: 'svg' | 'png'): string {
  const holder = document.createElement('div');
  const scale = kind === 'png' ? 2 : 1;
  const [width, height] = [figure.width * scale, figure.height * scale];
  const chart = init(holder, null, { renderer: kind === 'svg' ? 'svg' : 'canvas', width, height, devicePixelRatio: 2 });
  const dress: Dress = { paper: '#ffffff', ink: '#000000', face: 'DejaVu Sans Condensed, DejaVu Sans, sans-serif' };
  const screenFace = kind === 'png' ? '"Steelyard Note", DejaVu Sans, sans-serif' : dress.face;
  draw(chart, figure, { dress: { ...dress, face: screenFace }, scale });
  const text =
    kind === 'svg' ? chart.renderToSVGString() : chart.getDataURL({ type: 'png', backgroundColor: '#ffffff' });
  chart.dispose();
  return text;
}
