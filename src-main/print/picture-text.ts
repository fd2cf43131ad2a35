import type { Pen } from './pen';
import { INK, type Style } from './sheet';

/** A text of a picture: it is drawn by the pen, which places marks over letters and finds faces for rare signs; the SVG drawer does neither. */
export interface PictureText {
  readonly text: string;
  readonly style: Style;
  readonly opacity: number;
  readonly at: 'start' | 'middle' | 'end';
  readonly x: number;
  readonly y: number;
  /** Takes the text's own place to that of the picture: a b c d e f. */
  readonly matrix: Matrix;
}

type Matrix = readonly [number, number, number, number, number, number];

const TEXT = /<text\b([^>]*)>([^<]*)<\/text>\s*/g;
const ANCHORS = { start: 'start', middle: 'middle', end: 'end' } as const;
/** From the middle of a line to its baseline, in sizes. */
const HALF_CAPITAL = 0.36;
const NONE: Matrix = [1, 0, 0, 1, 0, 0];

/** Parts an SVG picture of the chart library into what is drawn and what is written. */
export function partTexts(svg: string): { readonly shapes: string; readonly texts: readonly PictureText[] } {
  const texts = Array.from(svg.matchAll(TEXT), ([, attributes = '', content = '']) => readText(attributes, content));
  return { shapes: svg.replace(TEXT, ''), texts };
}

/** Writes a text of a picture whose top left corner is at x and top, drawn at a scale. */
export function writeText(pen: Pen, text: PictureText, place: { x: number; top: number; scale: number }): void {
  const { pdf } = pen;
  pdf.save();
  pdf.transform(place.scale, 0, 0, place.scale, place.x, place.top);
  pdf.transform(...text.matrix);
  if (text.opacity < 1) pdf.fillOpacity(text.opacity);
  pen.write({ text: text.text, style: text.style, x: text.x, baseline: text.y, at: text.at });
  pdf.restore();
}

function readText(attributes: string, content: string): PictureText {
  const read = (name: string) => new RegExp(`(?:^|\\s)${name}="([^"]*)"`).exec(attributes)?.[1];
  const css = read('style') ?? '';
  const size = Number(/font-size:\s*([\d.]+)px/.exec(css)?.[1] ?? 12);
  const bold = /font-weight:\s*(?:bold|[6-9]00)/.test(css);
  const central = read('dominant-baseline') === 'central';
  return {
    text: decode(content),
    style: { face: bold ? 'plain-strong' : 'plain', size, leading: size, ink: inkOf(read('fill')) },
    opacity: Number(read('fill-opacity') ?? 1),
    at: ANCHORS[(read('text-anchor') ?? 'start') as keyof typeof ANCHORS],
    x: Number(read('x') ?? 0),
    y: Number(read('y') ?? 0) + (central ? HALF_CAPITAL * size : 0),
    matrix: matrixOf(read('transform')),
  };
}

/** The two forms that the chart library writes: a move, and a matrix where the text is turned. */
function matrixOf(transform: string | undefined): Matrix {
  if (transform === undefined) return NONE;
  const [, name, inside = ''] = /^(\w+)\(([^)]*)\)$/.exec(transform) ?? [];
  const numbers = inside.split(/[\s,]+/).map(Number);
  if (name === 'matrix' && numbers.length === 6) return numbers as unknown as Matrix;
  const [e, f] = numbers;
  if (name !== 'translate' || e === undefined || f === undefined)
    throw new Error(`a text of a picture is placed by ${transform}`);
  return [1, 0, 0, 1, e, f];
}

/** The library of the PDF knows hexadecimal colours alone. */
function inkOf(fill: string | undefined): string {
  const parts = /^rgba?\((\d+),\s*(\d+),\s*(\d+)/.exec(fill ?? '')?.slice(1);
  if (parts !== undefined) return `#${parts.map((part) => Number(part).toString(16).padStart(2, '0')).join('')}`;
  return fill ?? INK;
}

function decode(text: string): string {
  const signs: Record<string, string> = { lt: '<', gt: '>', amp: '&', quot: '"', '#39': "'", apos: "'" };
  return text.replace(/&([a-z]+|#39);/g, (whole, name: string) => signs[name] ?? whole);
}
