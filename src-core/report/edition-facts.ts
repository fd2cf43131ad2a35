/** What is known of the edition that a report belongs to. */
export interface EditionFacts {
  readonly number: number;
  /** ISO 8601. */
  readonly time: string;
  readonly author: string;
  /** Head of the trail when the edition was frozen. */
  readonly head: string;
  readonly project?: string | null;
  readonly decisions?: readonly Decision[];
  /** Structures tried, by the project's trail; null where no trail counts them. */
  readonly structuresTried?: { readonly count: number } | null;
}

export interface Decision {
  readonly author: string;
  readonly time: string;
  readonly text: string;
}
