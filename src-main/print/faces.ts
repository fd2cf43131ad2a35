import { existsSync } from 'node:fs';
import { dirname, join } from 'node:path';

/** What a face is for. The reserves stand in where the others lack a character. */
export type Face = 'text' | 'strong' | 'plain' | 'plain-strong' | 'reserve' | 'mathematics';

const FACE_FILES: Readonly<Record<Face, string>> = {
  text: 'DejaVuSerifCondensed.ttf',
  strong: 'DejaVuSerifCondensed-Bold.ttf',
  plain: 'DejaVuSansCondensed.ttf',
  'plain-strong': 'DejaVuSansCondensed-Bold.ttf',
  reserve: 'DejaVuSans.ttf',
  mathematics: 'DejaVuMathTeXGyre.ttf',
};

/** Where each face looks for a character, in order. */
export const SUBSTITUTES: Readonly<Record<Face, readonly Face[]>> = {
  text: ['text', 'plain', 'reserve', 'mathematics'],
  strong: ['strong', 'plain-strong', 'reserve', 'mathematics'],
  plain: ['plain', 'reserve', 'text', 'mathematics'],
  'plain-strong': ['plain-strong', 'reserve', 'strong', 'mathematics'],
  reserve: ['reserve', 'text', 'mathematics'],
  mathematics: ['mathematics', 'text', 'reserve'],
};

export const FACES = Object.keys(FACE_FILES) as readonly Face[];

/**
 * Finds a font file in resources/fonts of the nearest folder above this one that has it: the root of a checkout, or of a package.
 *
 * Throws where there is none: the program was packed without its fonts.
 */
export function fontPath(face: Face): string {
  for (let folder = import.meta.dirname; ; folder = dirname(folder)) {
    const path = join(folder, 'resources', 'fonts', FACE_FILES[face]);
    if (existsSync(path)) return path;
    if (dirname(folder) === folder) throw new Error(`${FACE_FILES[face]} is not beside the program`);
  }
}
