import { fontSubset } from '@core/figures/font-subset';
import plainFace from '../../resources/fonts/DejaVuSansCondensed.ttf?inline';

/**
 * An SVG with the letters that it uses inside it, so that it looks the same wherever it is opened. A reader that takes no faces from a drawing
 * falls back on the names; places and lengths were measured with the face that is carried.
 */
export function standAlone(svg: string): string {
  // By its text, not parsed: the page's own policy would look at the styles of a parsed drawing. What entities stand for is taken along.
  const letters = `${svg.replace(/<[^>]*>/g, '')}&<>"'`;
  const face = base64Of(fontSubset(bytesOf(plainFace), letters));
  const rule = `@font-face{font-family:"Steelyard Note";src:url(data:font/ttf;base64,${face}) format("truetype")}`;
  return svg.replace(/^<svg[^>]*>/, (start) => `${start}<defs><style>${rule}</style></defs>`);
}

/** The bytes behind a data address. */
function bytesOf(address: string): Uint8Array<ArrayBuffer> {
  return Uint8Array.from(atob(address.slice(address.indexOf(',') + 1)), (letter) => letter.charCodeAt(0));
}

function base64Of(bytes: Uint8Array): string {
  return btoa(Array.from(bytes, (byte) => String.fromCharCode(byte)).join(''));
}
