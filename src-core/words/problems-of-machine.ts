import { findingPhrase } from './findings';
import { count, plural, quoted } from './numbers';
import { meant, type Sentences } from './phrases';

type MachineCode =
  | 'unknown-verb'
  | 'unknown-option'
  | 'missing-argument'
  | 'surplus-argument'
  | 'not-a-project'
  | 'project-newer'
  | 'project-damaged'
  | 'trail-broken'
  | 'edition-differs'
  | 'no-edition'
  | 'no-project'
  | 'nothing-open'
  | 'is-a-project'
  | 'project-gone'
  | 'project-replaced'
  | 'project-overwritten'
  | 'already-there'
  | 'unknown-plan'
  | 'name-taken'
  | 'disk-full'
  | 'read-only'
  | 'no-permission'
  | 'file-in-use'
  | 'cannot-write'
  | 'cannot-read'
  | 'in-the-way'
  | 'file-too-large'
  | 'table-too-large'
  | 'memory-full'
  | 'cancelled'
  | 'fault-of-ours'
  | 'stranger';

/** Sizes of files, from bytes. */
const megabytes = (bytes: number) => plural(Math.ceil(bytes / 1e6), 'megabyte');

/** What went wrong around a fit: the call, the project file, the machine. */
export const machineSentences: Sentences<MachineCode> = {
  'unknown-verb': ({ found, nearest }) =>
    `There is no verb ${quoted(found)}.${meant(nearest)} "steelyard --help" lists them.`,
  'unknown-option': ({ found, nearest }) =>
    `There is no option ${quoted(found)} here.${meant(nearest)} "steelyard --help" lists them.`,
  'missing-argument': ({ verb, argument }) => `"${verb}" needs ${argument}. "steelyard --help" shows how it is called.`,
  'surplus-argument': ({ verb, found }) => `"${verb}" does not know what to do with ${quoted(found)}. Leave it out.`,

  'not-a-project': ({ file }) => `${quoted(file)} is not a project of this program. Choose a file NAME.steelyard.`,
  'project-newer': ({ file, found, known }) =>
    `${quoted(file)} was written by a newer version (its layout is ${found}, this version knows up to ${known}). Open it with that version; it was left untouched.`,
  'project-damaged': ({ file, finding }) =>
    `${quoted(file)} is damaged: ${findingPhrase(finding)}. It was left untouched; go back to a copy.`,
  'trail-broken': ({ entry, finding }) =>
    `The trail is broken at entry ${count(entry)}: ${findingPhrase(finding)}. What was recorded was changed afterwards, or the file is damaged.`,
  'edition-differs': ({ edition, what, found, expected }) =>
    `Edition ${edition} does not rebuild: ${what} is ${found}, and was ${expected} when it was frozen.`,
  'no-edition': ({ file }) => `${quoted(file)} holds no such edition. Freeze one first.`,
  'no-project': ({ file }) => `There is no project ${quoted(file)}. Check the name and the folder.`,
  'nothing-open': () => 'No project is open. Open one, or make a new one, first.',
  'is-a-project': ({ file, offered }) =>
    `${quoted(file)} is a project of this program, and not a table. ${offered ? 'Open it' : 'Choose it'} as a project.`,
  'project-gone': ({ file }) =>
    `${quoted(file)} was removed or moved while it was open. What is on the screen is still whole: save a copy under another name, or put the file back.`,
  'project-replaced': ({ file }) =>
    `Another file was put in the place of ${quoted(file)} while it was open; it is left alone. What is on the screen is still whole: save a copy under another name.`,
  'project-overwritten': ({ file }) =>
    `Another program wrote over ${quoted(file)} while it was open, so nothing more is written to it. Save what the screen still shows, close the project, and go back to a copy.`,
  'already-there': ({ file }) => `There is already a file ${quoted(file)}. Move it away, or choose another name.`,
  'unknown-plan': ({ found }) => `The project holds no plan number ${found} any more. Choose one of those it lists.`,
  'name-taken': ({ name }) => `Another plan of this project is called ${quoted(name)}. Choose another name.`,

  'disk-full': ({ file }) => `The disk is full: ${quoted(file)} could not be written. Make room, and try again.`,
  'read-only': ({ file }) => `${quoted(file)} is write-protected. Choose another place, or lift the protection.`,
  'no-permission': ({ file }) =>
    `You may not open or write ${quoted(file)}. Choose another place, or ask for permission.`,
  'file-in-use': ({ file }) => `Another program is using ${quoted(file)}. Close it there, and try again.`,
  'cannot-write': ({ file, reason }) => `${quoted(file)} could not be written (${reason}).`,
  'cannot-read': ({ file, reason }) => `${quoted(file)} could not be read (${reason}).`,
  'in-the-way': ({ file, wanted }) =>
    `A ${wanted === 'file' ? 'folder' : 'file'} called ${quoted(file)} stands where a ${wanted} should go. Move it, or choose another name.`,
  'file-too-large': ({ file, size, limit }) =>
    `${quoted(file)} has ${megabytes(size)}, and files up to ${megabytes(limit)} are read here. Keep the rows and columns that the cells need.`,
  'table-too-large': ({ file, of, found, limit }) =>
    `${quoted(file)} has some ${count(found)} ${of}, and tables up to ${count(limit)} ${of} are read here. Keep the rows and columns that the cells need.`,
  'memory-full': ({ file }) =>
    `The table of ${quoted(file)} does not fit into memory. Keep the rows and columns that the cells need.`,
  cancelled: () => 'Stopped at your request. Nothing was written.',
  'fault-of-ours': ({ message }) =>
    `This program made a mistake (${message}). Nothing of yours is wrong; please report the sentence in brackets.`,
  stranger: ({ origin }) => `A page from ${origin} asked for data and was refused.`,
};
