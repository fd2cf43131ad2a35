import type { Plan } from '../protocol/plan';
import type { Beam, CellResult, Coefficient, Result } from '../protocol/result';
import { interceptName } from '../protocol/term-names';
import {
  count,
  decimalsBy,
  list,
  listWithin,
  number,
  numberWord,
  percent,
  plural,
  pluralWord,
  rangeText,
} from './numbers';
import { cellName } from './units';

/**
 * Who carries a coefficient, and what is left of it without them.
 *
 *     Six of 120 cells carry half the total pull on income. Pull is what a cell could do; refitting without the six gives 0.79 (0.40 to 1.18) instead of 0.83.
 */
export function beamSentence(beam: Beam, own: Coefficient, plan: Plan): string {
  const { cells, change } = beam.heaviest;
  const word = numberWord(cells.length);
  const start = `${word} of ${count(beam.pulls.length)} cells ${cells.length === 1 ? 'carries' : 'carry'} half the total pull on ${beam.term}: ${listWithin(cells.map((label) => cellName(label, plan)))}.`;
  const without = cells.length === 1 ? 'it' : `the ${word.toLowerCase()}`;
  const decimals = decimalsBy(own.se, own.estimate);
  const after =
    change === null
      ? `a refit without ${without} is not possible, as the other cells cannot carry the terms.`
      : `refitting without ${without} gives ${number(change.estimate, { decimals })}${change.low === null ? '' : ` (${rangeText(change.low, change.high, decimals)})`} instead of ${number(own.estimate, { decimals })}.`;
  return `${start} Pull is what a cell could do; ${after}`;
}

/** How the weight is spread over cells. */
export function concentrationSentence({ cells, effectiveCells, plan }: Result): string {
  const shares = cells.map(({ weightShare }) => weightShare).sort((a, b) => b - a);
  const half = heaviestWithHalf(shares);
  const heaviest = cells.reduce((a, b) => (b.weightShare > a.weightShare ? b : a));
  const like = effectiveCells === null ? '' : ` They weigh like ${number(effectiveCells, { digits: 3 })} equal cells.`;
  return `${numberWord(half)} of ${plural(cells.length, 'cell')} ${half === 1 ? 'has' : 'have'} half the weight; the heaviest, ${cellName(heaviest.label, plan)}, has ${percent(heaviest.weightShare)}.${like}`;
}

/** The fewest of shares in falling order that make a half. */
export function heaviestWithHalf(shares: readonly number[]): number {
  let sum = 0;
  for (const [i, share] of shares.entries()) {
    sum += share;
    if (sum >= 0.5) return i + 1;
  }
  return shares.length;
}

/** The cell whose loss moves a coefficient most. */
export function mostMovingSentence(result: Result, term: string): string | null {
  const j = result.fit.coefficients.findIndex((one) => one.term === term);
  const own = result.fit.coefficients[j];
  let most: { cell: CellResult; shift: number } | null = null;
  for (const cell of result.cells) {
    const shift = cell.coefficientShifts[j] ?? null;
    if (shift !== null && (most === null || Math.abs(shift) > Math.abs(most.shift))) most = { cell, shift };
  }
  if (most === null || own === undefined) return null;
  const tried = result.overturn.find(
    (one) => one.term === term && one.change.kind === 'cell' && one.change.what === most.cell.label,
  );
  const decimals = decimalsBy(own.se, own.estimate);
  const then = tried === undefined ? '' : `, to ${number(tried.estimate, { decimals })}`;
  return `No single cell moves ${term} more than ${cellName(most.cell.label, result.plan)}: leaving it out shifts the coefficient by ${number(Math.abs(most.shift), { digits: 2 })} of its standard errors${then}.`;
}

/** Cells with a leverage above twice the mean, and whitened residuals that stand out. */
export function outstandingSentence({ cells, fit, plan }: Result): string {
  const twice = (2 * fit.coefficients.length) / cells.length;
  const heavy = cells.filter(({ leverage }) => leverage > twice);
  const far = cells.filter(({ studentisedWithout: t }) => t !== null && Math.abs(t) > FAR);
  const high =
    heavy.length === 0
      ? `No cell has a leverage above twice the mean (${number(twice, { digits: 2 })}).`
      : `${pluralWord(heavy.length, 'cell')} ${heavy.length === 1 ? 'has' : 'have'} a leverage above twice the mean (${number(twice, { digits: 2 })}): ${listWithin(heavy.sort((a, b) => b.leverage - a.leverage).map(({ label, leverage }) => `${cellName(label, plan)} (${number(leverage, { digits: 2 })})`))}.`;
  const out =
    far.length === 0
      ? ` No studentised residual, without its own cell, is beyond ${FAR}.`
      : ` Studentised without itself, ${plural(far.length, 'residual')} ${far.length === 1 ? 'is' : 'are'} beyond ${FAR}: ${listWithin(far.sort((a, b) => Math.abs(b.studentisedWithout as number) - Math.abs(a.studentisedWithout as number)).map(({ label, studentisedWithout }) => `${cellName(label, plan)} (${number(studentisedWithout, { digits: 2 })})`))}.`;
  return `${high}${out}`;
}

/** Beyond this a studentised residual is told by name. */
const FAR = 3;

/** Terms that vary only between groups of cells: it is the groups that they rest on. */
export function carriedSentence({ fit, cells }: Pick<Result, 'fit' | 'cells'>): string | null {
  const rest = fit.carriedBy.filter(({ term }) => term !== interceptName || fit.coefficients.length === 1);
  const between = rest.flatMap(({ term, by }) =>
    by
      .filter((one) => one.constantWithin && one.groups < cells.length && !isLevelOf(term, one.column))
      .map(({ column, groups }) => `${term} between the ${plural(groups, 'group')} of ${column}`),
  );
  if (between.length === 0) return null;
  const told = between.slice(0, MOST_CARRIED);
  const left = between.length - told.length;
  return `Some terms vary only between groups of cells, and rest on the groups: ${list(told)}${left > 0 ? `, and ${count(left)} more` : ''}.`;
}

const MOST_CARRIED = 6;

/** A category of the groups themselves varies between them by design. */
export function isLevelOf(term: string, column: string): boolean {
  return term.split(' × ').some((factor) => factor.startsWith(`${column}: `));
}
