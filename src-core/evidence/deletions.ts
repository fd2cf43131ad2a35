import type { Fitted } from '../estimate/fitted';
import type { Plan } from '../protocol/plan';
import type { Coefficient } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { blockShiftsOf } from './block-shifts';
import { groupingColumns } from './carried-by';
import { shiftIn } from './crossing';
import { heldFit } from './held';
import { deletionShifts } from './influence';
import { judgeOf } from './judge';
import { placesWithout } from './subset';

/** As many deletions of cells, and as many of blocks, are told of each term: the largest shifts. */
const TOLD = 10;
/** Refits of deletions at most, and the work G k^2 that they may take together. */
const REFITS = 100;
const WORK = 5e7;
/** So many refits are made however large the table. */
const FEWEST = 10;

/** One coefficient without a cell or a block. */
export interface Deletion {
  readonly j: number;
  readonly kind: 'cell' | 'block';
  readonly what: string;
  readonly one: Coefficient;
}

interface Candidate {
  readonly kind: 'cell' | 'block';
  readonly what: string;
  readonly gone: readonly number[];
  readonly shifts: readonly number[];
}

/**
 * The deletions that move each coefficient asked for most: single cells, and groups of label columns with two cells or more. All are ranked by their
 * exact shifts with the variance parameters held; the largest are refitted for their intervals under the plan's inference.
 */
export function deletions(of: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly coefficients: readonly Coefficient[];
  readonly asked: (j: number) => boolean;
  readonly hooks?: Hooks;
}): Deletion[] {
  const { fitted, cells, plan, coefficients, asked, hooks } = of;
  if (fitted.residualFreedom <= 0) return [];
  const judge = judgeOf(cells, plan);
  const candidates = [cellCandidates(fitted, cells), blockCandidates(fitted, cells, hooks)];
  const k = coefficients.length;
  const limit = Math.max(FEWEST, Math.min(REFITS, Math.floor(WORK / (cells.count * k * k))));
  const largest = coefficients.flatMap((_, j) =>
    asked(j) ? candidates.flatMap((some) => largestOf(some, coefficients, j)) : [],
  );
  largest.sort((a, b) => b.size - a.size || a.j - b.j);
  const refits = new Map<Candidate, readonly Coefficient[] | null>();
  return largest.flatMap(({ candidate, j }): Deletion[] => {
    if (!refits.has(candidate)) {
      if (refits.size >= limit || hooks?.cancelled()) return [];
      hooks?.progress('sensitivity', refits.size / limit);
      const rows = placesWithout(cells.count, new Set(candidate.gone));
      const left = heldFit(fitted, rows);
      refits.set(candidate, left && judge(left, rows));
    }
    const one = refits.get(candidate)?.[j];
    return one ? [{ j, kind: candidate.kind, what: candidate.what, one }] : [];
  });
}

interface Ranked {
  readonly candidate: Candidate;
  readonly j: number;
  readonly size: number;
}

/** The candidates that move one coefficient most, largest first; the earlier of two alike. */
function largestOf(candidates: readonly Candidate[], coefficients: readonly Coefficient[], j: number): Ranked[] {
  const own = coefficients[j] as Coefficient;
  const kept: Ranked[] = [];
  for (const candidate of candidates) {
    const size = shiftIn(own, own.estimate - (candidate.shifts[j] as number));
    if (!(size >= 0) || (kept.length === TOLD && size <= (kept[TOLD - 1] as Ranked).size)) continue;
    const place = kept.findIndex((one) => size > one.size);
    kept.splice(place < 0 ? kept.length : place, 0, { candidate, j, size });
    if (kept.length > TOLD) kept.pop();
  }
  return kept;
}

function cellCandidates(fitted: Fitted, cells: Cells): Candidate[] {
  const shifts = deletionShifts(fitted);
  return cells.labels.map((what, g) => ({
    kind: 'cell',
    what,
    gone: [g],
    shifts: shifts.map((row) => row[g] as number),
  }));
}

function blockCandidates(fitted: Fitted, cells: Cells, hooks?: Hooks): Candidate[] {
  const shiftsOf = blockShiftsOf(fitted);
  return groupingColumns(cells).flatMap((grouping) => {
    const members = Array.from({ length: grouping.count }, (): number[] => []);
    for (const [g, group] of grouping.groups.entries()) members[group]?.push(g);
    return members.flatMap((gone, group): Candidate[] => {
      if (gone.length < 2 || hooks?.cancelled()) return [];
      const shifts = shiftsOf(gone);
      return shifts ? [{ kind: 'block', what: `${grouping.name} = ${grouping.values[group]}`, gone, shifts }] : [];
    });
  });
}
