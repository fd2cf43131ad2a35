import { join, resolve } from 'node:path';
import { app, BrowserWindow, Menu, protocol, session } from 'electron';
import { menuOf } from './menu';
import { mayGoTo, mayLoad, serveFrom, switches } from './security';
import { type Opened, openWindow } from './window';

const development = app.isPackaged ? null : (process.env['ELECTRON_RENDERER_URL'] ?? null);
const profile = process.env['STEELYARD_PROFILE'];
let open: Opened | null = null;

// Before `ready`, as Electron wants it.
if (profile) app.setPath('userData', profile);
protocol.registerSchemesAsPrivileged([{ scheme: 'app', privileges: { standard: true, secure: true } }]);
for (const [name, value] of switches(development)) app.commandLine.appendSwitch(name, value);
app.enableSandbox();

/** A project among the words of a command line, as an absolute path. */
function projectIn(words: readonly string[], folder: string): string | null {
  const named = words.slice(1).find((word) => word.endsWith('.steelyard'));
  return named === undefined ? null : resolve(folder, named);
}

/** Nothing comes in or goes out but the program's own files. */
function lockDown(): void {
  const own = session.defaultSession;
  own.setPermissionRequestHandler((_contents, _permission, decide) => decide(false));
  own.setPermissionCheckHandler(() => false);
  own.setDevicePermissionHandler(() => false);
  own.setSpellCheckerEnabled(false);
  own.on('will-download', (event) => event.preventDefault());
  own.webRequest.onBeforeRequest(({ url }, decide) => decide({ cancel: !mayLoad(url, development) }));
  protocol.handle('app', serveFrom(join(import.meta.dirname, '../renderer')));
  app.on('web-contents-created', (_event, contents) => {
    contents.setWindowOpenHandler(() => ({ action: 'deny' }));
    contents.on('will-frame-navigate', (event) => mayGoTo(event.url, development) || event.preventDefault());
    contents.on('will-redirect', (event) => event.preventDefault());
    contents.on('will-attach-webview', (event) => event.preventDefault());
    contents.setWebRTCIPHandlingPolicy('disable_non_proxied_udp');
  });
}

function show(offered: string | null): void {
  if (open !== null && !open.window.isDestroyed()) {
    if (offered !== null) open.offer(offered);
    if (open.window.isMinimized()) open.window.restore();
    open.window.focus();
  } else open = openWindow({ development, offered });
}

function start(): void {
  lockDown();
  Menu.setApplicationMenu(Menu.buildFromTemplate(menuOf(process.platform, (command) => open?.order(command))));
  show(projectIn(process.argv, process.cwd()));
  app.on('activate', () => {
    if (BrowserWindow.getAllWindows().length === 0) show(null);
  });
}

if (!app.requestSingleInstanceLock()) app.quit();
else {
  let isQuitting = false;
  app.on('second-instance', (_event, words, folder) => show(projectIn(words, folder)));
  app.on('open-file', (event, file) => {
    event.preventDefault();
    if (app.isReady()) show(file);
  });
  app.on('before-quit', () => {
    isQuitting = true;
  });
  app.on('window-all-closed', () => {
    if (process.platform !== 'darwin' || isQuitting) app.quit();
  });
  // Never awaited at the top: `ready` comes only after this module has been evaluated.
  void app.whenReady().then(start);
}
