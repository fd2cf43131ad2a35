import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** An independent reader of PDF. */
export const hasPoppler = installed();

export interface Word {
  readonly text: string;
  readonly page: number;
  readonly left: number;
  readonly top: number;
  readonly right: number;
  readonly bottom: number;
}

export function read(bytes: Uint8Array, program: 'pdfinfo' | 'pdffonts' | 'pdftotext', ...options: string[]): string {
  const folder = mkdtempSync(join(tmpdir(), 'steelyard-print-'));
  try {
    const file = join(folder, 'report.pdf');
    writeFileSync(file, bytes);
    const out = program === 'pdftotext' ? ['-'] : [];
    return execFileSync(program, [...options, file, ...out], { encoding: 'utf8', maxBuffer: 1e9 });
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** Every word with the box that its font gives it. */
export function wordsOf(bytes: Uint8Array): Word[] {
  const pages = read(bytes, 'pdftotext', '-bbox').split('<page ').slice(1);
  const word = /<word xMin="([-\d.]+)" yMin="([-\d.]+)" xMax="([-\d.]+)" yMax="([-\d.]+)">(.*?)<\/word>/g;
  return pages.flatMap((content, i) =>
    Array.from(content.matchAll(word), ([, left, top, right, bottom, text = '']) => ({
      text,
      page: i + 1,
      left: Number(left),
      top: Number(top),
      right: Number(right),
      bottom: Number(bottom),
    })),
  );
}

function installed(): boolean {
  try {
    execFileSync('pdfinfo', ['-v'], { stdio: 'ignore' });
    execFileSync('pdftotext', ['-v'], { stdio: 'ignore' });
    return true;
  } catch {
    return false;
  }
}
