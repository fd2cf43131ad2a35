import { plural } from './numbers';

/** Why a file could not be read or written, in the brackets of its sentence: what happened, and what to do. */

const megabytes = (bytes: number) => plural(Math.ceil(bytes / 1e6), 'megabyte');

/** sizes in bytes. */
export function tooLarge(size: number, limit: number): string {
  return `it has ${megabytes(size)}, and files up to ${megabytes(limit)} are read; keep the rows and columns that the cells need`;
}

export const tooLargeForMemory = 'its table does not fit into memory; keep the rows and columns that the cells need';

export const removedWhileOpen =
  'it was removed or moved while it was open; what is on the screen is still whole: save it under another name';

export const replacedWhileOpen =
  'another file was put in its place while it was open; what is on the screen is still whole: save it under another name';
