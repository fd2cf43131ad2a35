import { cautionCodes, cautionGroups } from '../protocol/cautions';
import type { Caution, CautionGroup, Detail } from '../protocol/result';
import type { CautionSources, Found } from './caution-sources';
import { cautionsOfData } from './cautions-of-data';
import { cautionsOfFit } from './cautions-of-fit';
import { cautionsOfInference } from './cautions-of-inference';
import { cautionsOfStructure } from './cautions-of-structure';
import { cautionsOfTerms } from './cautions-of-terms';

const groupOrder: readonly CautionGroup[] = ['changes-answer', 'limits-claim', 'for-record'];

/**
 * The cautions that the data call for, by rule: those that change the answer first, the largest shift first among them, then those that limit
 * the claim, then those for the record, each in the order of `cautionCodes`.
 *
 * Those that the data stage noticed (`cells.cautions`) are among them. Facts are numbers and names only. Nothing is said of what was not computed.
 *
 * Source: METHODS of the program, 11.
 */
export function cautionsOf(sources: CautionSources): Caution[] {
  const found: Found[] = [
    ...cautionsOfFit(sources),
    ...cautionsOfInference(sources),
    ...cautionsOfStructure(sources),
    ...cautionsOfTerms(sources),
    ...cautionsOfData(sources),
  ];
  const placed: Placed[] = found.map((one) => ({
    caution: { code: one.code, group: groupOf(one), facts: one.facts as Detail },
    shift: sizeOfShift(one),
  }));
  for (const caution of sources.cells.cautions ?? []) placed.push({ caution, shift: -1 });
  const codes: readonly string[] = cautionCodes;
  placed.sort(
    (a, b) =>
      groupOrder.indexOf(a.caution.group) - groupOrder.indexOf(b.caution.group) ||
      b.shift - a.shift ||
      codes.indexOf(a.caution.code) - codes.indexOf(b.caution.code),
  );
  return placed.map(({ caution }) => caution);
}

interface Placed {
  readonly caution: Caution;
  readonly shift: number;
}

function groupOf(found: Found): CautionGroup {
  if (found.code === 'errors-estimated' && !found.facts.noisy) return 'for-record';
  return cautionGroups[found.code];
}

/** Shift in errors of the coefficient; a check that failed and too few digits go before any, what has no shift comes after. */
function sizeOfShift({ code, facts }: Found): number {
  if (code === 'self-check-failed' || code === 'few-digits') return Number.MAX_VALUE;
  if (!('shift' in facts) || facts.shift === null) return -1;
  return facts.shift.inErrors ?? 0;
}
