import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { resolve } from 'node:path';
import { fontSubset } from '@core/figures/font-subset';
import { describe, expect, it } from 'vitest';

/** What fontkit, which pdfkit reads its fonts with, tells of a font. */
interface ReadFont {
  readonly numGlyphs: number;
  readonly familyName: string;
  readonly copyright: string | null;
  readonly glyphForCodePoint: (point: number) => {
    readonly id: number;
    readonly advanceWidth: number;
    readonly path: { readonly toSVG: () => string };
  };
  readonly hasGlyphForCodePoint: (point: number) => boolean;
}
const { create } = createRequire(import.meta.url)('fontkit') as { create: (bytes: Buffer) => ReadFont };

const text = 'Squared residual, φ̂ and τ² against size −0.5 × 10³ Ärger “per size” · δ';

describe('fontSubset', () => {
  it.each(['DejaVuSansCondensed.ttf', 'DejaVuSansCondensed-Bold.ttf', 'DejaVuSans.ttf'])(
    'keeps every letter of a text as %s has it, advance and outline, by another reader of fonts',
    (file) => {
      const bytes = readFileSync(resolve('resources/fonts', file));
      const part = fontSubset(Uint8Array.from(bytes), text);
      const [whole, subset] = [create(bytes), create(Buffer.from(part))];
      expect(part.length).toBeLessThan(bytes.length / 10);
      for (const letter of new Set(text)) {
        const point = letter.codePointAt(0) as number;
        const [one, other] = [whole.glyphForCodePoint(point), subset.glyphForCodePoint(point)];
        expect(other.id, letter).not.toBe(0);
        expect(other.advanceWidth, letter).toBe(one.advanceWidth);
        expect(other.path.toSVG(), letter).toBe(one.path.toSVG());
      }
      // Nothing else is in it, but the parts of composite letters; its licence asks that the copyright goes along.
      expect(subset.hasGlyphForCodePoint('Z'.charCodeAt(0))).toBe(false);
      expect(subset.numGlyphs).toBeLessThanOrEqual(1 + new Set(text).size + 12);
      expect(subset.copyright).toBe(whole.copyright);
    },
  );

  it('leaves out what the font lacks or what lies beyond the first plane, and takes an empty text', () => {
    const bytes = readFileSync(resolve('resources/fonts/DejaVuSansCondensed.ttf'));
    const subset = create(Buffer.from(fontSubset(Uint8Array.from(bytes), '東😀a')));
    expect(subset.hasGlyphForCodePoint(0x6771)).toBe(false);
    expect(subset.hasGlyphForCodePoint(0x1f600)).toBe(false);
    expect(subset.hasGlyphForCodePoint(0x61)).toBe(true);
    expect(create(Buffer.from(fontSubset(Uint8Array.from(bytes), ''))).numGlyphs).toBe(1);
  });
});
