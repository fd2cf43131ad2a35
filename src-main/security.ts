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
  "img-src 'self' data:",
  "font-src 'self'",
  "connect-src 'none'",
  "base-uri 'none'",
  "form-action 'none'",
  "frame-ancestors 'none'",
].join('; ');

const kinds: Readonly<Record<string, string>> = {
  '.html': 'text/html; charset=utf-8',
  '.js': 'text/javascript; charset=utf-8',
  '.css': 'text/css; charset=utf-8',
  '.svg': 'image/svg+xml',
  '.png': 'image/png',
  '.woff2': 'font/woff2',
  '.ttf': 'font/ttf',
};

/** The file of a page address, or null where the address leads out of the folder. */
export function fileOf(address: string, folder: string): string | null {
  const url = new URL(address);
  if (`${url.protocol}//${url.host}` !== ORIGIN) return null;
  let path: string;
  try {
    path = decodeURIComponent(url.pathname);
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
    const headers = { 'content-security-policy': POLICY, 'x-content-type-options': 'nosniff' };
    const file = fileOf(request.url, folder);
    if (file === null) return new Response('forbidden', { status: 403, headers });
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
  const url = new URL(address);
  if (url.protocol === 'data:' || url.protocol === 'blob:' || url.protocol === 'devtools:') return true;
  if (`${url.protocol}//${url.host}` === ORIGIN) return true;
  if (development === null) return false;
  const own = new URL(development);
  return url.host === own.host && ['http:', 'ws:'].includes(url.protocol);
}
