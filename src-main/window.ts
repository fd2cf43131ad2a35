import { join } from 'node:path';
import { BrowserWindow } from 'electron';
import { ORIGIN } from './security';

/** Opens the program's window; development: the address of the page server while developing, else null. */
export function openWindow(development: string | null): void {
  const window = new BrowserWindow({
    width: 1280,
    height: 800,
    show: false,
    title: 'Steelyard',
    webPreferences: {
      preload: join(import.meta.dirname, '../preload/preload.cjs'),
      contextIsolation: true,
      sandbox: true,
      nodeIntegration: false,
      webSecurity: true,
      spellcheck: false,
    },
  });
  window.once('ready-to-show', () => window.show());
  window.webContents.setWindowOpenHandler(() => ({ action: 'deny' }));
  window.webContents.on('will-navigate', (event) => event.preventDefault());
  void window.loadURL(development ?? `${ORIGIN}/index.html`);
}
