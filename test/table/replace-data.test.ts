import { replaceData } from '@core/table/replace-data';
import { expect, it } from 'vitest';
import { planWith, sourcesOf } from './support';

const plan = planWith({
  data: {
    file: 'cells.csv',
    read: { statuses: { x: 'suppressed-confidential' } },
    join: [{ file: 'more.csv', on: { place: 'p' } }],
    derive: [{ name: 'd', as: 'centred', of: 'z' }],
  },
  roles: { label: ['place', 't'], outcome: 'y', size: 'n' },
  terms: [{ column: 'd' }],
});
const before = { 'cells.csv': 'place,t,y,n\na,1,1,5\nb,1,2,5\nc,1,3,5\n', 'more.csv': 'p,z\na,1\nb,2\nc,3\n' };

function replaced(after: Record<string, string>) {
  return replaceData({ plan, before: sourcesOf(plan, before), after: sourcesOf(plan, after) });
}

it('new data are shown by what came, went and changed, joined columns included, and the plan is applied to them anew', () => {
  const outcome = replaced({
    'cells.csv': 'place,t,y,n\nb,1,2.0,5\na,1,x,6\nd,1,4,5\n',
    'more.csv': 'p,z\na,1\nb,5\nd,4\n',
  });
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  expect(outcome.value.added).toEqual(['d · 1']);
  expect(outcome.value.lost).toEqual(['c · 1']);
  expect(outcome.value.changed).toEqual([
    { label: 'b · 1', column: 'y', before: '2', after: '2.0' },
    { label: 'b · 1', column: 'z', before: '2', after: '5' },
    { label: 'a · 1', column: 'y', before: '1', after: 'x' },
    { label: 'a · 1', column: 'n', before: '5', after: '6' },
  ]);
  expect(outcome.value.cells.labels).toEqual(['b · 1', 'd · 1']);
});

it('the same data change nothing', () => {
  const outcome = replaced(before);
  expect(
    outcome.ok && { added: outcome.value.added, lost: outcome.value.lost, changed: outcome.value.changed },
  ).toEqual({ added: [], lost: [], changed: [] });
});

it('new data that lack a column of the plan are refused', () => {
  const outcome = replaced({ ...before, 'cells.csv': 'place,t,mean,n\na,1,1,5\n' });
  expect(outcome.ok || outcome.problems).toMatchObject([{ code: 'unknown-column', at: '/roles/outcome' }]);
});
