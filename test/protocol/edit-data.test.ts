import { draftOf, readDraft, unsaidRead } from '@core/protocol/draft';
import {
  meaningOf,
  placeOf,
  stateScale,
  withFootnote,
  withJoin,
  withoutStep,
  withRead,
  withScale,
  withToken,
  withUnit,
} from '@core/protocol/edit-data';
import { normalPlan } from '@core/protocol/read';
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

describe('the scale of the outcome', () => {
  const rates = (plan: object) => {
    const read = normalPlan({
      format: 'steelyard-plan/1',
      data: { file: 'a.csv' },
      roles: { outcome: null, count: 'k', exposure: 'e' },
      variance: { parts: [{ kind: 'counts', scale: 'free' }] },
      ...plan,
    });
    return read.ok ? read.value : expect.fail(JSON.stringify(read.problems));
  };

  it('takes the method of the structure on the new scale, and takes it back on the old one', () => {
    const plan = rates({});
    expect(plan.estimate).toEqual({ method: 'least-squares' });
    const onLog = withScale(plan, 'log');
    expect(onLog).toMatchObject({ outcomeScale: 'log', estimate: { method: 'full' }, addedHalf: null });
    expect(withScale(onLog, 'identity')).toEqual(plan);
    expect(rates(onLog)).toEqual(onLog);
  });

  it('keeps a chosen method that the new scale offers', () => {
    const plan = rates({ estimate: { method: 'two-step' } });
    expect(withScale(plan, 'log').estimate).toEqual({ method: 'full' });
    const share = rates({
      roles: { outcome: 'y', outcomeUnit: 'share', size: 'n' },
      variance: { parts: [{ kind: 'binomial', scale: 'free' }] },
      estimate: { method: 'two-step' },
    });
    expect(withScale(share, 'logit')).toMatchObject({ estimate: { method: 'two-step' }, addedHalf: 'extreme-cells' });
  });

  it('lets an inference go that the method does not carry, and says so', () => {
    const plan = rates({ estimate: { method: 'restricted' }, inference: { kind: 'kenward-roger', level: 0.9 } });
    const edited = stateScale(plan, 'log');
    expect(edited.plan.inference).toEqual({ kind: 'model', level: 0.9 });
    expect(edited.also).toEqual(['estimate', 'inference']);
  });

  it('waits with method and halves until a structure is stated', () => {
    expect(withScale(draft.plan, 'logit')).toMatchObject({ outcomeScale: 'logit', estimate: null, addedHalf: null });
  });
});
