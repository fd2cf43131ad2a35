import { draftOf, readDraft, unsaidRead } from '@core/protocol/draft';
import {
  meaningOf,
  placeOf,
  withFootnote,
  withJoin,
  withoutStep,
  withRead,
  withToken,
  withUnit,
} from '@core/protocol/edit-data';
import { describe, expect, it } from 'vitest';

const draft = draftOf({ name: 'a.csv', sha256: '0'.repeat(64) });
const data = { kind: 'data' } as const;
const joined = withJoin(draft.plan, { file: 'b.csv', on: { x: 'x' }, read: unsaidRead });

describe('what a token means', () => {
  it('is one thing only: a status takes the place of a missing code, and the other way round', () => {
    const coded = withToken(draft.plan, data, '-9', { missingIn: 'x' });
    expect(coded.data.read.missing).toEqual({ x: ['-9'] });
    const status = withToken(coded, data, '-9', { status: 'not-collected' });
    expect(status.data.read).toMatchObject({ statuses: { '-9': 'not-collected' }, missing: {} });
    const again = withToken(withToken(status, data, '-9', { missingIn: 'x' }), data, '-9', { missingIn: 'y' });
    expect(again.data.read).toMatchObject({ statuses: {}, missing: { x: ['-9'], y: ['-9'] } });
    expect(withToken(again, data, '-9', null).data.read).toEqual(unsaidRead);
  });

  it('is said for its own file alone, and survives names that objects have of themselves', () => {
    const proto = withToken(joined, data, '__proto__', { status: 'blank' });
    expect(meaningOf(proto, data, '__proto__')).toEqual({ status: 'blank' });
    const plan = withToken(joined, { kind: 'join', at: 0 }, 'constructor', { status: 'blank' });
    expect(meaningOf(plan, { kind: 'join', at: 0 }, 'constructor')).toEqual({ status: 'blank' });
    expect(meaningOf(plan, data, 'constructor')).toBeNull();
  });
});

describe('a file’s place', () => {
  it('is found from a pointer of the plan', () => {
    expect(placeOf('/data/join/0/read', joined)).toEqual({ kind: 'join', at: 0 });
    expect(placeOf('/roles/outcome', joined)).toEqual(data);
    expect(placeOf(null, joined)).toEqual(data);
  });

  it('takes its own way of being read', () => {
    const plan = withFootnote(withRead(joined, { kind: 'join', at: 0 }, { decimal: ',' }), data, '*');
    expect(plan.data.join[0]?.read.decimal).toBe(',');
    expect(plan.data.read).toMatchObject({ decimal: null, footnotes: ['*'] });
    expect(withoutStep(plan, 'join', 0).data.join).toEqual([]);
  });
});

describe('units and drafts', () => {
  it('takes a unit back where the text is empty', () => {
    const plan = withUnit(draft.plan, 'x', ' hours ');
    expect(plan.units).toEqual({ x: 'hours' });
    expect(withUnit(plan, 'x', ' ').units).toEqual({});
  });

  it('reads back what was kept, and nothing else', () => {
    expect(readDraft(JSON.stringify(draft))).toEqual(draft);
    expect(readDraft('{"format":"other"}')).toBeNull();
    expect(readDraft('not JSON')).toBeNull();
    expect(readDraft(null)).toBeNull();
  });
});
