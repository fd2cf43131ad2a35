/** SQLite's application_id of a project file: the letters STLY. */
export const PROJECT_MARK = 0x53544c59;

/** So many first bytes tell a project from any other file. */
export const HEAD_BYTES = 100;

const container = 'SQLite format 3\0';

/**
 * Whether a file is a project of this program, by its first bytes alone: SQLite's own mark at 0, the program's at 68.
 *
 * head: at least the first 100 bytes; a file that is shorter is none.
 */
export function isProject(head: Uint8Array): boolean {
  if (head.length < HEAD_BYTES) return false;
  for (let i = 0; i < container.length; i++) if (head[i] !== container.charCodeAt(i)) return false;
  return new DataView(head.buffer, head.byteOffset).getUint32(68) === PROJECT_MARK;
}
