import type { NoDeparture, WhyNot } from '../protocol/evidence';
import type { Detail, Evidence, EvidenceTest, SmallestDeparture } from '../protocol/result';

/** Every test of the structure is read at this level. */
export const LEVEL = 0.05;

/** The smallest departure is the one found this often. */
export const POWER = 0.8;

interface Figures {
  readonly statistic: number | null;
  readonly freedom1?: number | null;
  readonly freedom2?: number | null;
  readonly p: number | null;
  readonly detail?: Detail;
}

/** A test's figures with their reading at level .05; without a p value nothing is read. */
export function evidenceOf(test: EvidenceTest, figures: Figures): Evidence {
  const { statistic, p } = figures;
  return {
    test,
    statistic,
    freedom1: figures.freedom1 ?? null,
    freedom2: figures.freedom2 ?? null,
    p,
    reading: p === null ? 'not-applicable' : p < LEVEL ? 'rejects' : 'does-not-contradict',
    smallestDeparture: null,
    detail: figures.detail ?? {},
  };
}

/** A test that says nothing here, and why. */
export function notApplicable(test: EvidenceTest, why: WhyNot, detail: Detail = {}): Evidence {
  return evidenceOf(test, { statistic: null, p: null, detail: { ...detail, why } });
}

/** The evidence with its smallest departure, or with the reason why there is none. */
export function withDeparture(
  evidence: Evidence,
  found: SmallestDeparture | NoDeparture,
  detail: Detail = {},
): Evidence {
  if (typeof found === 'string') return { ...evidence, detail: { ...evidence.detail, departureWhy: found } };
  return { ...evidence, smallestDeparture: found, detail: { ...evidence.detail, ...detail } };
}
