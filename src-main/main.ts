import { join } from 'node:path';
import { ASK } from '@core/protocol/channels';
import { app, BrowserWindow, ipcMain, Menu, protocol, session } from 'electron';
import { answering } from './bridge/answer';
import { demoHandlers } from './bridge/demo';
import { mayLoad, ORIGIN, serveFrom } from './security';
import { openWindow } from './window';

protocol.registerSchemesAsPrivileged([{ scheme: 'app', privileges: { standard: true, secure: true } }]);

const profile = process.env['STEELYARD_PROFILE'];
if (profile) app.setPath('userData', profile);

const development = app.isPackaged ? null : (process.env['ELECTRON_RENDERER_URL'] ?? null);
const resources = join(import.meta.dirname, '../../resources');

function lockDown(): void {
  const own = session.defaultSession;
  own.setPermissionRequestHandler((_contents, _permission, decide) => decide(false));
  own.setPermissionCheckHandler(() => false);
  own.setSpellCheckerEnabled(false);
  own.webRequest.onBeforeRequest(({ url }, decide) => decide({ cancel: !mayLoad(url, development) }));
  protocol.handle('app', serveFrom(join(import.meta.dirname, '../renderer')));
}

function start(): void {
  lockDown();
  const answer = answering(development ? new URL(development).origin : ORIGIN, demoHandlers(resources));
  ipcMain.handle(ASK, (event, question: unknown, payload: unknown) => {
    const page = new URL(event.senderFrame?.url ?? 'about:blank');
    return answer(`${page.protocol}//${page.host}`, String(question), payload);
  });
  Menu.setApplicationMenu(null);
  openWindow(development);
  app.on('activate', () => {
    if (BrowserWindow.getAllWindows().length === 0) openWindow(development);
  });
}

if (!app.requestSingleInstanceLock()) app.quit();
else {
  app.on('second-instance', () => BrowserWindow.getAllWindows()[0]?.focus());
  app.on('window-all-closed', () => {
    if (process.platform !== 'darwin') app.quit();
  });
  // Never awaited at the top: `ready` comes only after this module has been evaluated.
  void app.whenReady().then(start);
}
