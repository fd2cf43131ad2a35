/** The largest file that is taken out of the page (dropped or pasted), in bytes: it crosses from the page to the program in one piece. */
export const LARGEST_SENT = 32_000_000;

/** A table of more rows, or of more fields, is refused before it is read: it would take more memory than there is. */
export const MOST_ROWS = 2_000_000;
export const MOST_FIELDS = 20_000_000;

/** The largest file that is read from its place, where it was chosen by a dialog, in bytes. Larger ones are no tables of cells. */
export const LARGEST_READ = 100_000_000;
