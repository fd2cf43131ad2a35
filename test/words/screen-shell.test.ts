import { globSync, readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { actionText, redoText, undoText } from '@core/words/screen-shell';
import { describe, expect, it } from 'vitest';

const root = resolve(import.meta.dirname, '../..');

/** Every code under which the window or the project room makes a step that can be undone. */
function actions(): string[] {
  const files = globSync('{src-renderer,src-main,src-core/words}/**/*.{ts,svelte}', { cwd: root });
  const codes = files.flatMap((file) => {
    const text = readFileSync(resolve(root, file), 'utf8');
    return [...text.matchAll(/'((?:change|add|rename|replace|accept|set|freeze)-[a-z]+)'/g)].map(
      ([, code]) => code as string,
    );
  });
  return [...new Set(codes)].sort();
}

describe('the name of a step', () => {
  it('is a phrase of its own for every code that the program uses', () => {
    const codes = actions();
    expect(codes).toEqual(
      expect.arrayContaining([
        'change-variance',
        'change-matters',
        'change-target',
        'change-scale',
        'change-tests',
        'change-limits',
      ]),
    );
    for (const code of codes) expect(actionText(code), code).not.toBe(code.replaceAll('-', ' '));
  });

  it('stands behind undo and redo, which say where there is nothing', () => {
    expect(undoText('change-target')).toBe('Undo: what the weights aim at');
    expect(redoText('change-scale')).toBe('Redo: the scale of the outcome');
    expect([undoText(null), redoText(null)]).toEqual(['Nothing to undo', 'Nothing to redo']);
  });
});
