import { type Cloud, countsOf, type Raster } from '@core/figures/cloud';
import type { View } from '@core/figures/plane';

/** How clouds are drawn: the canvas's pixels, and ink as red, green and blue. */
export interface Brush extends Raster {
  readonly ink: readonly [number, number, number];
}

/** Draws clouds as they stand in a view: each pixel as dark as that many points of their opacity, one over another. */
export function drawClouds(
  context: CanvasRenderingContext2D,
  clouds: readonly Cloud[],
  view: View,
  brush: Brush,
): void {
  const { width, height } = brush;
  const image = context.createImageData(width, height);
  const pixels = new Uint32Array(image.data.buffer);
  const [red, green, blue] = brush.ink;
  const ink = red | (green << 8) | (blue << 16);
  const light = new Float32Array(width * height).fill(1);
  for (const cloud of clouds) {
    const counts = countsOf(cloud, view, brush);
    const rest = Float32Array.from({ length: 256 }, (_, n) => (1 - cloud.opacity) ** n);
    for (let i = 0; i < counts.length; i++)
      if (counts[i] !== 0) light[i] = (light[i] as number) * (rest[counts[i] as number] as number);
  }
  for (let i = 0; i < light.length; i++)
    if (light[i] !== 1) pixels[i] = ink | (Math.round(255 * (1 - (light[i] as number))) << 24);
  context.putImageData(image, 0, 0);
}
