import { spanOf } from '../algebra/orthonormal';
import { largestOf, powerOfTwoBelow } from '../algebra/powers-of-two';
import { chiSquareUpper, chiSquareUpperQuantile } from '../numbers/distributions';
import { log } from '../numbers/elementary';
import type { EvidenceTest } from '../protocol/result';
import type { Frame } from './frame';
import { evidenceOf, LEVEL, notApplicable } from './reading';
import { powerOn, strengthOn } from './squares-on-columns';
import type { VarianceTest } from './variance-test';

interface Variant {
  readonly test: EvidenceTest;
  /** Columns on which the squared residuals are regressed, beside a constant. */
  readonly columns: readonly { readonly name: string; readonly values: Float64Array }[];
  /** Divides by the squares' own spread instead of what normal errors would give. */
  readonly studentised: boolean;
}

/** Breusch & Pagan 1979: squared whitened residuals over their mean, explained sum of squares on the columns, halved. */
export function breuschPagan(frame: Frame): VarianceTest | ReturnType<typeof notApplicable> {
  return scoreTest(frame, { test: 'breusch-pagan', columns: testColumns(frame), studentised: false });
}

/** Koenker 1981: G times R^2 of the squared whitened residuals on the columns. */
export function koenker(frame: Frame) {
  return scoreTest(frame, { test: 'koenker', columns: testColumns(frame), studentised: true });
}

/** Cook & Weisberg 1983 on ln m: variance proportional to a power of the effective size beyond the stated one. */
export function sizeScore(frame: Frame) {
  return onLogSize(frame, 'size-score');
}

export function sizeScoreStudentised(frame: Frame) {
  return onLogSize(frame, 'size-score-studentised');
}

/** White 1980: G times R^2 on the columns, their squares and cross products. */
export function white(frame: Frame) {
  const columns = named(frame, frame.plan.tests?.whiteColumns ?? null);
  const products = columns.flatMap((a, i) =>
    columns.slice(i).map((b, j) => ({
      name: j === 0 ? `${a.name}^2` : `${a.name} × ${b.name}`,
      values: a.values.map((x, g) => x * (b.values[g] as number)),
    })),
  );
  return scoreTest(frame, { test: 'white', columns: [...columns, ...products], studentised: true });
}

/**
 * Score test of the stated variances against any that depend on the columns.
 *
 *     u = r~^2 G / r~'r~;  z: the columns cleared of the constant and of each other
 *     original |Z'u|^2 / 2;  studentised G |Z'u|^2 / sum (u - 1)^2;  chi-square on the columns kept
 *
 * Not applicable: no columns, all of them constant, as many as cells.
 * detail: columns, kept (their number after dependent ones were dropped).
 */
function scoreTest(frame: Frame, variant: Variant) {
  const { test, columns, studentised } = variant;
  const named = { columns: columns.map((column) => column.name) };
  if (columns.length === 0) return notApplicable(test, 'no-columns', named);
  const constant = spanOf([new Float64Array(frame.count).fill(1)]);
  const vectors = spanOf(
    columns.map((column) => column.values),
    constant,
  );
  const freedom = vectors.length;
  if (freedom === 0) return notApplicable(test, test.startsWith('size') ? 'equal-sizes' : 'no-columns', named);
  if (freedom + 1 >= frame.count) return notApplicable(test, 'too-few-cells', named);

  const strength = strengthOn(vectors, studentised);
  const critical = chiSquareUpperQuantile(LEVEL, freedom);
  const statistic = strength(frame.residuals);
  const p = chiSquareUpper(statistic, freedom);
  const evidence = evidenceOf(test, { statistic, freedom1: freedom, p, detail: { ...named, kept: freedom } });
  return { evidence, strength, critical, largeSamplePower: powerOn({ vectors, studentised, critical }) };
}

function onLogSize(frame: Frame, test: 'size-score' | 'size-score-studentised') {
  if (!frame.sizes) return notApplicable(test, 'no-size');
  const column = { name: 'log(size)', values: frame.sizes.map((m) => log(m)) };
  return scoreTest(frame, { test, columns: [column], studentised: test === 'size-score-studentised' });
}

function testColumns(frame: Frame) {
  return named(frame, frame.plan.tests?.columns ?? null);
}

/** Data columns by name, or the model's own beside its intercept; never whitened, each in a unit of its own in which products stay near 1. */
function named(frame: Frame, columns: readonly string[] | null) {
  const { design } = frame;
  const found = columns
    ? columns.map((name) => ({ name, values: frame.cells.numbers(name).values.high }))
    : design.columns.flatMap((column, j) =>
        (design.termOf[j] as number) < 0 ? [] : [{ name: design.names[j] as string, values: column.high }],
      );
  return found.map(({ name, values }) => {
    const unit = powerOfTwoBelow(largestOf(values));
    return { name, values: values.map((x) => x / unit) };
  });
}
