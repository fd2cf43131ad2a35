/** A reference value that the program contradicts, with the derivation that decides for the program. */
export interface Disagreement {
  readonly id: string;
  readonly fit: string;
  readonly quantity: string;
  readonly derivation: string;
}

/** None is known. A test fails when this list grows: an entry needs its derivation, and the test its new number. */
export const disagreements: readonly Disagreement[] = [];
