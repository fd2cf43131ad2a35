// Pictures of pages and screens hold a ground, an ink and the steps between: as PNG with a palette they are a third of the size.
import { crc32, deflateSync, inflateSync } from 'node:zlib';

const signature = Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]);
const MOST = 64;

/** A PNG of 8 bits a channel, without transparency that matters, written anew with at most 64 colours. */
export function withPalette(png: Buffer): Buffer {
  const { width, height, colours } = pixelsOf(png);
  const counts = new Map<number, number>();
  for (const colour of colours) counts.set(colour, (counts.get(colour) ?? 0) + 1);
  const ranked = [...counts].sort(([, a], [, b]) => b - a).map(([colour]) => colour);
  const palette = chosen(ranked);
  const place = new Map(ranked.map((colour) => [colour, nearest(palette, colour)]));
  const lines = Buffer.alloc(height * (width + 1));
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++)
      lines[y * (width + 1) + 1 + x] = place.get(colours[y * width + x] as number) as number;
  const header = Buffer.alloc(13);
  header.writeUInt32BE(width, 0);
  header.writeUInt32BE(height, 4);
  header.set([8, 3, 0, 0, 0], 8);
  const colourBytes = Buffer.from(palette.flatMap((colour) => [colour >> 16, (colour >> 8) & 255, colour & 255]));
  return Buffer.concat([
    signature,
    chunk('IHDR', header),
    chunk('PLTE', colourBytes),
    chunk('IDAT', deflateSync(lines, { level: 9 })),
    chunk('IEND', Buffer.alloc(0)),
  ]);
}

/** The most used colours that are not too near one another. */
function chosen(ranked: readonly number[]): number[] {
  for (let gap = 0; ; gap += 3) {
    const palette: number[] = [];
    for (const colour of ranked) {
      if (palette.every((other) => distance(colour, other) > gap)) palette.push(colour);
      if (palette.length > MOST) break;
    }
    if (palette.length <= MOST) return palette;
  }
}

function distance(one: number, other: number): number {
  const by = (shift: number) => Math.abs(((one >> shift) & 255) - ((other >> shift) & 255));
  return Math.max(by(16), by(8), by(0)) + (one === other ? -1 : 0);
}

function nearest(palette: readonly number[], colour: number): number {
  let best = 0;
  for (let i = 1; i < palette.length; i++)
    if (distance(colour, palette[i] as number) < distance(colour, palette[best] as number)) best = i;
  return best;
}

function chunk(kind: string, data: Buffer): Buffer {
  const body = Buffer.concat([Buffer.from(kind, 'latin1'), data]);
  const frame = Buffer.alloc(8);
  frame.writeUInt32BE(data.length, 0);
  frame.writeUInt32BE(crc32(body), 4);
  return Buffer.concat([frame.subarray(0, 4), body, frame.subarray(4)]);
}

/** Every pixel as one number, red first; transparency is left out. */
function pixelsOf(png: Buffer): { width: number; height: number; colours: Uint32Array } {
  const data: Buffer[] = [];
  let header = Buffer.alloc(13);
  for (let at = 8; at < png.length; at += 12 + png.readUInt32BE(at)) {
    const body = png.subarray(at + 8, at + 8 + png.readUInt32BE(at));
    const kind = png.toString('latin1', at + 4, at + 8);
    if (kind === 'IHDR') header = Buffer.from(body);
    if (kind === 'IDAT') data.push(body);
  }
  const [width, height] = [header.readUInt32BE(0), header.readUInt32BE(4)];
  const channels = { 2: 3, 6: 4 }[header[9] as number];
  if (header[8] !== 8 || channels === undefined || header[12] !== 0) throw new Error('a PNG of another kind');
  const bytes = unfiltered(inflateSync(Buffer.concat(data)), width * channels, channels);
  const colours = new Uint32Array(width * height);
  for (let i = 0; i < colours.length; i++) colours[i] = bytes.readUIntBE(i * channels, 3);
  return { width, height, colours };
}

/** Lines as they were before each was written as differences. length: bytes of a line. */
function unfiltered(lines: Buffer, length: number, channels: number): Buffer {
  const bytes = Buffer.alloc((lines.length / (length + 1)) * length);
  for (let from = 0, to = 0; from < lines.length; from += length + 1, to += length)
    for (let i = 0; i < length; i++) {
      const left = i < channels ? 0 : (bytes[to + i - channels] as number);
      const above = to === 0 ? 0 : (bytes[to + i - length] as number);
      const corner = i < channels || to === 0 ? 0 : (bytes[to + i - length - channels] as number);
      const guess = [0, left, above, (left + above) >> 1, paeth(left, above, corner)][lines[from] as number] as number;
      bytes[to + i] = (lines[from + 1 + i] as number) + guess;
    }
  return bytes;
}

function paeth(left: number, above: number, corner: number): number {
  const guess = left + above - corner;
  const [a, b, c] = [left, above, corner].map((one) => Math.abs(guess - one)) as [number, number, number];
  if (a <= b && a <= c) return left;
  return b <= c ? above : corner;
}
