import { choleskyInPlace, choleskyOf } from '@core/algebra/cholesky';
import { seeded } from '@core/numbers/random';
import { expect, it } from 'vitest';

it.each([1, 2, 3, 5, 8, 13, 40, 95, 96])('a factor made in place of %i rows has the bits of one made beside', (k) => {
  const random = seeded(k);
  const rows = Array.from({ length: k }, () => Array.from({ length: k + 2 }, () => random.normal()));
  const dot = (a: readonly number[], b: readonly number[]) => a.reduce((sum, x, i) => sum + x * (b[i] as number), 0);
  const matrix = Float64Array.from(rows.flatMap((one) => rows.map((other) => dot(one, other))));
  const beside = choleskyOf(matrix, k) as Float64Array;
  const inPlace = choleskyInPlace(matrix.slice(), k) as Float64Array;
  for (let i = 0; i < k; i++)
    expect(inPlace.subarray(i * k, i * k + i + 1)).toEqual(beside.subarray(i * k, i * k + i + 1));
});

it('neither factors a matrix that is not positive definite', () => {
  const matrix = Float64Array.of(1, 2, 2, 1);
  expect(choleskyOf(matrix, 2)).toBeNull();
  expect(choleskyInPlace(matrix.slice(), 2)).toBeNull();
});
