import { mkdirSync, mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { normalPlan } from '@core/protocol/read';
import { fromFolder, gather } from '@main/engine/inputs';
import { expect, it } from 'vitest';

const plan = (data: object) => {
  const made = normalPlan({
    format: 'steelyard-plan/1',
    data,
    roles: { outcome: 'y', size: 'n' },
    variance: { parts: [{ kind: 'per-size' }] },
  });
  if (!made.ok) throw new Error(JSON.stringify(made.problems));
  return made.value;
};

it('a folder and a name that is not there are files not found, each at its own place of the plan', () => {
  const folder = mkdtempSync(join(tmpdir(), 'steelyard-'));
  mkdirSync(join(folder, 'cells.csv'));
  const files = gather(
    plan({ file: 'cells.csv', join: [{ file: 'no\0name.csv', on: { a: 'a' } }] }),
    fromFolder(folder),
  ).sources;
  expect([...files.values()]).toEqual([
    { ok: false, problems: [{ code: 'file-not-found', at: '/data/file', facts: { file: 'cells.csv' } }] },
    { ok: false, problems: [{ code: 'file-not-found', at: '/data/join/0/file', facts: { file: 'no\0name.csv' } }] },
  ]);
});

it('one file read in two ways is read twice', () => {
  const folder = mkdtempSync(join(tmpdir(), 'steelyard-'));
  writeFileSync(join(folder, 'cells.csv'), 'a;y;n\nx;1,204;3\n');
  const data = {
    file: 'cells.csv',
    read: { decimal: ',' },
    join: [{ file: 'cells.csv', on: { a: 'a' }, read: { decimal: '.' } }],
  };
  const styles = [...gather(plan(data), fromFolder(folder)).sources].map(([key, table]) => [
    key,
    table.ok && table.value.columns[1]?.style,
  ]);
  expect(styles).toEqual([
    ['cells.csv', { decimal: ',', group: null }],
    ['cells.csv (read 2)', { decimal: '.', group: ',' }],
  ]);
});
