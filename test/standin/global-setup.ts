import { existsSync } from 'node:fs';
import { findChromium } from './launch.ts';

/** Once, before any worker: the browser is unpacked (side by side it races) and the build must be there. */
export default async function setup(): Promise<void> {
  if (!existsSync('out/main/main.js')) throw new Error('run `npm run build` first');
  process.env['STEELYARD_CHROMIUM'] ??= await findChromium();
}
