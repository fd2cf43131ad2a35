// `npm start`: real Electron when its binary is installed (or can be fetched), else an installed
// Chrome/Chromium/Edge in app mode over a pipe (no port is opened).
import { spawn } from 'node:child_process';
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { electronBinary, launchApp } from './launch.ts';

const exe = electronBinary();
if (exe) {
  spawn(exe, ['.'], { stdio: 'inherit' }).on('exit', (code) => process.exit(code ?? 0));
} else {
  const found = [
    process.env['STEELYARD_CHROMIUM'],
    '/usr/bin/chromium',
    '/usr/bin/google-chrome',
    '/usr/bin/microsoft-edge',
    '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
    join(process.env['PROGRAMFILES'] ?? '', 'Google/Chrome/Application/chrome.exe'),
    join(process.env['PROGRAMFILES(X86)'] ?? '', 'Microsoft/Edge/Application/msedge.exe'),
  ].find((p) => p && existsSync(p));
  if (!found) {
    console.log(
      'There is neither an Electron binary nor a Chrome, Chromium or Edge here to open a window in. Without a window, this does the job: npm run --silent steelyard -- run PLAN.json --out FOLDER',
    );
    process.exit(1);
  }
  console.log(
    `The Electron binary is not installed: the same built program opens in ${found} through the stand-in of test/standin.`,
  );
  const app = await launchApp({
    headed: true,
    executablePath: found,
    env: process.env['ELECTRON_RENDERER_URL'] ? { STANDIN_PACKAGED: '0' } : {},
  });
  const page = await app.firstWindow();
  page.once('close', () => void app.close());
}
