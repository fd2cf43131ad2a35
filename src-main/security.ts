import { readFile } from 'node:fs/promises';
import { extname, join, normalize, sep } from 'node:path';

/** Origin of the program's own page. */
export const ORIGIN = 'app://steelyard';

/** What the page may load: its own files, and nothing from anywhere else. */
export const POLICY = [
  "default-src 'none'",
  "script-src 'self'",
  "style-src 'self'",
  "style-src-attr 'unsafe-inline'",
  "img-src 'self' data: blob:",
  "font-src 'self'",
  "worker-src 'self'",
  "connect-src 'none'",
  "base-uri 'none'",
  "form-action 'none'",
  "frame-ancestors 'none'",
  "object-src 'none'",
].join('; ');

/** How the window's page runs: in a sandbox, apart from the preload, without Node and without a dictionary to fetch. */
export const PAGE_RIGHTS = {
  contextIsolation: true,
  sandbox: true,
  nodeIntegration: false,
  nodeIntegrationInSubFrames: false,
  nodeIntegrationInWorker: false,
  webSecurity: true,
  allowRunningInsecureContent: false,
  webviewTag: false,
  navigateOnDragDrop: false,
  spellcheck: false,
} as const;

/** Switches of the browser: no name is looked up, nothing is fetched in the background. development: the address of the page server, else null. */
export function switches(development: string | null): readonly (readonly [string, string])[] {
  const spared = development === null ? '' : `, EXCLUDE ${new URL(development).hostname}`;
  return [
    ['host-resolver-rules', `MAP * ~NOTFOUND${spared}`],
    ['disable-background-networking', ''],
    ['disable-component-update', ''],
    ['disable-domain-reliability', ''],
    ['no-pings', ''],
    ['force-webrtc-ip-handling-policy', 'disable_non_proxied_udp'],
  ];
}

const kinds: Readonly<Record<string, string>> = {
  '.html': 'text/html; charset=utf-8',
  '.js': 'text/javascript; charset=utf-8',
  '.mjs': 'text/javascript; charset=utf-8',
  '.css': 'text/css; charset=utf-8',
  '.svg': 'image/svg+xml',
  '.png': 'image/png',
  '.woff2': 'font/woff2',
  '.ttf': 'font/ttf',
};

/** Scheme and host of an address, also for schemes of which browsers say "null"; null for what is no address. */
function originOf(address: string): string | null {
  const url = URL.parse(address);
  return url === null ? null : `${url.protocol}//${url.host}`;
}

/** The file of a page address, or null where the address leads out of the folder. */
export function fileOf(address: string, folder: string): string | null {
  if (originOf(address) !== ORIGIN) return null;
  let path: string;
  try {
    path = decodeURIComponent(new URL(address).pathname);
  } catch {
    return null;
  }
  if (path.includes('\0')) return null;
  const file = normalize(join(folder, path));
  return file.startsWith(folder + sep) ? file : null;
}

/** Answers the program's own scheme out of one folder, with the content policy on every answer. */
export function serveFrom(folder: string) {
  return async (request: Request): Promise<Response> => {
    const headers = {
      'content-security-policy': POLICY,
      'x-content-type-options': 'nosniff',
      'referrer-policy': 'no-referrer',
      'cross-origin-opener-policy': 'same-origin',
    };
    const file = fileOf(request.url, folder);
    if (file === null) return new Response('forbidden', { status: 403, headers });
    if (request.method !== 'GET') return new Response('only read', { status: 405, headers });
    try {
      const kind = kinds[extname(file)] ?? 'application/octet-stream';
      return new Response(new Uint8Array(await readFile(file)), { headers: { ...headers, 'content-type': kind } });
    } catch {
      return new Response('not found', { status: 404, headers });
    }
  };
}

/** True for the addresses that may be asked for at all. development: the address of the page server while developing, else null. */
export function mayLoad(address: string, development: string | null): boolean {
  const url = URL.parse(address);
  if (url === null) return false;
  if (['data:', 'blob:', 'devtools:'].includes(url.protocol)) return true;
  if (originOf(address) === ORIGIN) return true;
  if (development === null) return false;
  return url.host === new URL(development).host && ['http:', 'ws:'].includes(url.protocol);
}

/** True where a page may send itself to an address: never, but while developing, when the page server renews its own page. */
export function mayGoTo(address: string, development: string | null): boolean {
  return development !== null && originOf(address) === originOf(development);
}

/** A frame, as Electron describes the sender of a message. */
interface Frame {
  readonly url: string;
  readonly parent: unknown;
}

/** Origin of the page that speaks, where it is a window's own page and no frame inside it; else "a frame" or "nobody", which no page is called. */
export function speaker(frame: Frame | null): string {
  if (frame === null) return 'nobody';
  return frame.parent === null ? (originOf(frame.url) ?? 'nobody') : 'a frame';
}
