/** The two channels between window and main process: questions with answers, and what main tells unasked. */
export const ASK = 'steelyard:ask';
export const TELL = 'steelyard:tell';

/** What the preload gives the page. */
export interface Door {
  readonly ask: (question: string, payload: unknown) => Promise<unknown>;
  /** Returns a function that stops listening. */
  readonly listen: (listener: (told: unknown) => void) => () => void;
}
