import type { Told } from '@core/protocol/bridge';

/** What stands in the window's frame and menu. */
export interface Standing {
  /** Name of the open project, without its folder; null where none is open. */
  readonly project: string | null;
  readonly undo: string | null;
  readonly redo: string | null;
}

/** What the machine gives a session: choosers, the clipboard, a way to the page. The window's are Electron's; a test's are plain functions. */
export interface Desk {
  readonly version: string;
  /** Folder for the program's own small files: the recent list, fresh copies of the demo. */
  readonly profile: string;
  /** Folder that holds demo/ and fonts/. */
  readonly resources: string;
  /** Asks for an existing file; null where none was chosen. */
  readonly chooseFile: (kind: FileKind) => Promise<string | null>;
  /** Asks where to write; null where no place was chosen. suggested: a file name without a folder. */
  readonly choosePlace: (kind: FileKind, suggested: string) => Promise<string | null>;
  readonly copy: (text: string, html: string | null) => Promise<void>;
  readonly tell: (told: Told) => void;
  /** To be called after every change of the project, its name or its way back. */
  readonly show: (standing: Standing) => void;
}

/** project: NAME.steelyard; data: a table that can be read; copy: anything that is saved out of the program, its ending as suggested. */
export type FileKind = 'project' | 'data' | 'copy';
