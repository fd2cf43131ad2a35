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
  /** Absent where there are none, as in editions that were frozen before notes were printed. */
  readonly notes?: readonly NoteFacts[];
  /** Structures tried, by the project's trail; null where no trail counts them. */
  readonly structuresTried?: { readonly count: number } | null;
}

/** What an author adds to one section of the report. */
export interface NoteFacts {
  /** Key of a heading in words/headings, `page-one`, or the heading's own text. */
  readonly place: string;
  readonly text: string;
  /** null where it is not on record. */
  readonly author: string | null;
  readonly time: string;
}

export interface Decision {
  readonly author: string;
  readonly time: string;
  readonly text: string;
}
