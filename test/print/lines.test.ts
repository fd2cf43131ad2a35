import { breakLines, printable, widestPiece } from '@main/print/lines';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

/** Every UTF-16 unit one wide. */
const count = (text: string) => text.length;

describe('a text broken into lines', () => {
  it('fits its width in every line, the space at its end apart', () => {
    fc.assert(
      fc.property(fc.string({ maxLength: 200 }), fc.integer({ min: 2, max: 30 }), (text, width) => {
        for (const line of breakLines(text, width, count)) expect(line.trimEnd().length).toBeLessThanOrEqual(width);
      }),
    );
  });

  it('loses and adds nothing but spaces', () => {
    const bare = (text: string) => text.replace(/\s/g, '');
    const words = fc
      .array(fc.string({ unit: 'grapheme', maxLength: 20 }), { maxLength: 30 })
      .map((all) => all.join(' '));
    fc.assert(
      fc.property(words, fc.integer({ min: 3, max: 25 }), (text, width) => {
        expect(bare(breakLines(text, width, count).join(''))).toBe(bare(text));
      }),
    );
  });

  it('reads as before when its lines are joined, where no word was too long', () => {
    const word = fc.stringMatching(/^[a-z]{1,8}$/);
    fc.assert(
      fc.property(fc.array(word, { minLength: 1, maxLength: 40 }), fc.integer({ min: 8, max: 30 }), (words, width) => {
        expect(breakLines(words.join(' '), width, count).join('')).toBe(words.join(' '));
      }),
    );
  });

  it('breaks at spaces, and after hyphens and strokes between letters', () => {
    expect(breakLines('one two', 3, count)).toEqual(['one ', 'two']);
    expect(breakLines('two-stage', 6, count)).toEqual(['two-', 'stage']);
    expect(breakLines('and/or', 4, count)).toEqual(['and/', 'or']);
    expect(breakLines('a−0.5 b', 6, count)).toEqual(['a−0.5 ', 'b']);
  });

  it('keeps a number with its per cent sign, and a relation with what follows it', () => {
    expect(breakLines('about 35 % of', 9, count)).toEqual(['about ', '35 % of']);
    expect(breakLines('when p ≤ 0.05', 8, count)).toEqual(['when p ', '≤ 0.05']);
  });

  it('cuts a word that no line can hold, after punctuation if it can, and never a letter from its marks', () => {
    expect(breakLines('abcdefgh', 3, count)).toEqual(['abc', 'def', 'gh']);
    expect(breakLines('abc_defgh', 5, count)).toEqual(['abc_', 'defgh']);
    expect(breakLines('ββ̂β', 2, count)).toEqual(['β', 'β̂', 'β']);
  });

  it('starts a new line where the text does, and gives later lines their own width', () => {
    expect(breakLines('a\nb', 9, count)).toEqual(['a ', 'b']);
    expect(breakLines('aaaa bbbb cc', 4, count, 2)).toEqual(['aaaa ', 'bb', 'bb ', 'cc']);
    expect(breakLines('', 5, count)).toEqual(['']);
  });
});

it('the widest piece of a text is its longest unbroken stretch', () => {
  expect(widestPiece('one three five', count)).toBe(5);
  expect(widestPiece('one\ntwo-stage', count)).toBe(5);
  expect(widestPiece('', count)).toBe(0);
});

it('a control character is printed as a space', () => {
  expect(printable('a\tb\u0007c\r\nd\u2028e')).toBe('a b c\nd e');
});
