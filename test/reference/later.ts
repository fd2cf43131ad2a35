/** Fits of the cases that need structures or inferences which this version refuses by name: every fit of the case, or those listed. */
export const later: Readonly<Record<string, 'all' | readonly string[]>> = {};
