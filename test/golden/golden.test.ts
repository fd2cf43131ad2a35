import { rmSync, writeFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { derived, goldenFile, known } from './golden';

describe('the demo’s files', () => {
  it('have the bytes that they had on the machine where the golden hashes were derived', () => {
    const found = derived();
    const changed = `${goldenFile}-changed`;
    rmSync(changed, { force: true });
    if (JSON.stringify(found) !== JSON.stringify(known())) writeFileSync(changed, JSON.stringify(found, null, 2));
    expect(found).toEqual(known());
  });
});
