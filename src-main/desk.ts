import { basename, extname, join } from 'node:path';
import type { Told } from '@core/protocol/bridge';
import { TELL } from '@core/protocol/channels';
import { type Command, commands } from '@core/protocol/commands';
import { fileKinds, windowTitle } from '@core/words/screen-menu';
import { app, type BrowserWindow, ClipboardItem, clipboard, dialog, type FileFilter, Menu } from 'electron';
import type { Desk, FileKind, Standing } from './bridge/desk';
import { versionOf } from './engine/run-plan';
import { inForce } from './menu';

const root = join(import.meta.dirname, '../..');

const filters: Readonly<Record<'project' | 'data', FileFilter[]>> = {
  project: [{ name: fileKinds.project, extensions: ['steelyard'] }],
  data: [
    { name: fileKinds.data, extensions: ['csv', 'tsv', 'txt'] },
    { name: fileKinds.all, extensions: ['*'] },
  ],
};

/** Saved copies are of the kind that their suggested name says. */
function filtersFor(kind: FileKind, suggested: string): FileFilter[] {
  if (kind !== 'copy') return filters[kind];
  const ending = extname(suggested).slice(1);
  return ending === '' ? [] : [{ name: ending.toUpperCase(), extensions: [ending] }];
}

/** Where a chooser begins: a machine need not have a folder for documents. */
function usualFolder(): string {
  try {
    return app.getPath('documents');
  } catch {
    return app.getPath('home');
  }
}

function tellTo(window: BrowserWindow, told: Told): void {
  if (!window.isDestroyed() && !window.webContents.isDestroyed()) window.webContents.send(TELL, told);
}

/** Sets the window's title and what of its menu is in force. */
function show(window: BrowserWindow, standing: Standing): void {
  if (window.isDestroyed()) return;
  window.setTitle(windowTitle(standing.project));
  const menu = Menu.getApplicationMenu();
  for (const command of Object.keys(commands) as Command[]) {
    const item = menu?.getMenuItemById(command);
    if (item) item.enabled = inForce(command, standing);
  }
}

/** The desk of a window: Electron's choosers, clipboard, frame and menu. */
export function deskOf(window: BrowserWindow): Desk {
  return {
    version: versionOf(root),
    profile: app.getPath('userData'),
    resources: join(root, 'resources'),
    chooseFile: async (kind) => {
      const { canceled, filePaths } = await dialog.showOpenDialog(window, {
        properties: ['openFile'],
        filters: filtersFor(kind, ''),
      });
      return canceled ? null : (filePaths[0] ?? null);
    },
    choosePlace: async (kind, suggested) => {
      const { canceled, filePath } = await dialog.showSaveDialog(window, {
        defaultPath: join(usualFolder(), basename(suggested)),
        filters: filtersFor(kind, suggested),
        properties: ['showOverwriteConfirmation', 'createDirectory'],
      });
      return canceled || filePath === '' ? null : filePath;
    },
    copy: (text, html) =>
      clipboard.write([new ClipboardItem({ 'text/plain': text, ...(html === null ? {} : { 'text/html': html }) })]),
    tell: (told) => tellTo(window, told),
    show: (standing) => show(window, standing),
  };
}
