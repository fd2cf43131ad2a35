import { list } from './numbers';

export const startTexts = {
  title: 'Steelyard',
  what: 'Weighs averages of unequal size against each other, and shows which of them tips the result. For tables of cell means, rates or proportions with the number of respondents or the standard error behind each.',
  offline: 'Nothing leaves this computer: the program opens no connection.',
  demo: 'Open the demo',
  demoSays:
    'Invented data on unpaid care in 19 parishes, with a plan that is fitted at once. It is a fresh copy: change whatever you like.',
  create: 'New project …',
  createSays: 'Asks for the name of one file, which then holds data, plans, fits, the trail and editions.',
  open: 'Open a project …',
  openSays: 'Any file NAME.steelyard.',
  recent: 'Recent projects',
  none: 'Projects that you open will be listed here.',
  forget: 'Forget this list',
  version: 'Version',
} as const;

/** When a project was opened last: day and time as they stand in ISO 8601, in UTC. */
export function openedText(opened: string): string {
  const [day = '', time = ''] = opened.split('T');
  return list(
    [day, time.slice(0, 5)].filter((part) => part !== ''),
    'at',
  );
}
