import { Buffer } from 'node:buffer';
import { unsaidRead as read } from '@core/protocol/draft';
import { proposeTypes } from '@main/intake/propose';
import { readSource } from '@main/intake/read-source';
import { expect, it } from 'vitest';

function proposals(content: string) {
  const table = readSource({ file: 'cells.csv', bytes: Buffer.from(content), read });
  if (!table.ok) throw new Error(JSON.stringify(table.problems));
  return proposeTypes(table.value);
}

it('types are proposed with their reason', () => {
  const content = [
    'key,class,region,label,mean,year,none',
    '01,1,North,a,1.5,2019,',
    '02,2,North,b,2.5,2020,',
    '01,1,South,c,3.25,2019,',
  ].join('\n');
  expect(proposals(content).map(({ column, type, reason }) => `${column}: ${type}, ${reason}`)).toEqual([
    'key: category, leading-zeros',
    'class: category, few-whole-numbers',
    'region: category, repeated-texts',
    'label: text, distinct-texts',
    'mean: number, numbers',
    'year: number, numbers',
    'none: text, blank',
  ]);
});

it('tokens that look like statuses are listed for confirmation, and none of them is decided', () => {
  const [mean] = proposals('mean,n\n1.5,3\n..,4\n(D),5\n<5,6\n1-9,7\n-,8\n..,9\n');
  expect(mean?.type).toBe('number');
  expect(mean?.reason).toBe('numbers-and-tokens');
  expect(mean?.tokens).toEqual([
    { token: '..', rows: 2, status: 'not-collected' },
    { token: '(D)', rows: 1, status: 'suppressed-confidential' },
    { token: '<5', rows: 1, status: 'interval' },
    { token: '1-9', rows: 1, status: 'interval' },
    { token: '-', rows: 1, status: null },
  ]);
});

it('a column that reads both ways is proposed as numbers, and says so', () => {
  expect(proposals('a;b\n1,204;x\n1,310;x\n')[0]).toMatchObject({ type: 'number', reason: 'reads-both-ways' });
});
