import { checkRange, checkRead } from './check-roles';
import { equalNames } from './check-terms';
import { problem } from './outcome';
import { below } from './pointer';
import type { Problem } from './problems';
import type { Replicates, Tabulation } from './tabulation';

/** The sections of a tabulation in their normal form; null where a section has faults of its own. */
export type TabulationSections = { readonly [K in keyof Tabulation]: Tabulation[K] | null };

/** What the keys of a tabulation demand of one another. */
export function checkTabulation({ microdata, outcome, cells, admit, variance }: TabulationSections): Problem[] {
  const problems: Problem[] = [];
  if (microdata !== null) {
    problems.push(...checkRead(microdata.read, '/microdata/read'));
    if (microdata.replicates !== null) problems.push(...checkReplicates(microdata.replicates));
    else if (variance === 'replicates') problems.push(problem('missing-key', { key: 'replicates' }, '/microdata'));
  }
  if (Array.isArray(outcome))
    problems.push(
      ...equalNames(
        outcome.map(({ kind, of }) => `${kind} of ${of}`),
        '/outcome',
      ),
    );
  if (cells !== null) {
    problems.push(
      ...equalNames(
        cells.map(({ column }) => column),
        '/cells',
      ),
    );
    problems.push(...cells.flatMap((cell, i) => checkBands(cell, below('/cells', i, 'bands'))));
  }
  return [...problems, ...(admit ?? []).flatMap(({ is }, i) => checkRange(is, below('/admit', i, 'is')))];
}

/** Bands must rise: the first limit that does not is told with the one before it. */
function checkBands({ column, bands }: Tabulation['cells'][number], at: string): Problem[] {
  const limits = bands ?? [];
  const i = limits.findIndex((limit, j) => j > 0 && limit <= (limits[j - 1] as number));
  if (i < 0) return [];
  return [problem('not-increasing', { column, before: limits[i - 1] as number, found: limits[i] as number }, at)];
}

/** A provider's factors, the strata of delete-one-per-stratum and Fay's constant are stated, never guessed. */
function checkReplicates({ columns, rule, perReplicate, overall }: Replicates): Problem[] {
  const at = '/microdata/replicates';
  const factors = below(at, 'perReplicate');
  const problems: Problem[] = [];
  const state = (key: string) => problems.push(problem('must-be-stated', { key, choices: null }, at));
  if (perReplicate === null) {
    if (rule === 'provider' || rule === 'delete-one-per-stratum') state('perReplicate');
  } else if (perReplicate.length !== columns.length) {
    problems.push(problem('wrong-length', { found: perReplicate.length, expected: columns.length }, factors));
  }
  if (rule === 'fay' && overall === null) state('overall');
  if (rule === 'fay' && overall !== null && overall >= 1)
    problems.push(problem('out-of-range', { found: overall, low: 0, high: 1 }, below(at, 'overall')));
  (perReplicate ?? []).forEach((factor, i) => {
    if (typeof factor === 'string' && rule !== 'delete-one-per-stratum')
      problems.push(problem('wrong-type', { found: 'string', expected: 'number' }, below(factors, i)));
    if (typeof factor === 'number' && factor < 0 && rule !== 'delete-one-per-stratum')
      problems.push(problem('out-of-range', { found: factor, low: 0, high: null }, below(factors, i)));
  });
  return problems;
}
