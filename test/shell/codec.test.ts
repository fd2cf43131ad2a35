import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { pack, unpack } from '../standin/pages.ts';

const there = (value: unknown) => unpack(JSON.parse(JSON.stringify(pack(structuredClone(value)))));

describe('what crosses between page and program in the stand-in', () => {
  it('arrives as structured cloning would bring it, of whatever it is made', () => {
    const anything = fc.anything({
      withBigInt: true,
      withDate: true,
      withMap: true,
      withSet: true,
      withTypedArray: true,
      withSparseArray: false,
    });
    fc.assert(
      fc.property(anything, (value) => {
        expect(there(value)).toEqual(structuredClone(value));
      }),
    );
  });

  it.each([
    ['not a number', Number.NaN],
    ['infinity', Number.NEGATIVE_INFINITY],
    ['minus zero', -0],
    ['nothing under a name', { a: undefined }],
    ['a key that looks like our own mark', { $: 'Date', of: 1 }],
    ['bytes that are a part of a longer buffer', new Uint8Array([1, 2, 3, 4]).subarray(1, 3)],
    ['doubles', new Float64Array([1.5, Number.NaN, -0])],
    ['a moment that is none', new Date(Number.NaN)],
  ])('keeps %s', (_, value) => {
    const got = there(value);
    expect(got).toEqual(structuredClone(value));
    expect(Object.is(got, -0)).toBe(Object.is(value, -0));
  });
});
