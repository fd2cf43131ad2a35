/** Names under which the program offers to make files; without an ending. */
export const fileNames = {
  newProject: 'New project',
  demo: 'Unpaid care (demo)',
} as const;

/** The plan of a project that was given no name of its own. */
export const firstPlanName = 'Main';
