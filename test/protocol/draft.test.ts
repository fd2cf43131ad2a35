import { type Draft, type DraftSteps, draftOf, draftText, readDraft, readSteps } from '@core/protocol/draft';
import { describe, expect, it } from 'vitest';

const draft = draftOf({ name: 'cells.csv', sha256: 'a'.repeat(64) });
const titled = (title: string): Draft => ({ ...draft, plan: { ...draft.plan, title } });
const step = (title: string) => ({ action: 'change-title', draft: titled(title) });

describe('a draft', () => {
  it('is kept with its steps, and both come back from the text', () => {
    const steps: DraftSteps = { done: [step('one'), step('two')], undone: [step('four')] };
    const text = draftText(titled('three'), steps);
    expect(readDraft(text)).toEqual(titled('three'));
    expect(readSteps(text)).toEqual(steps);
    expect(draftText(readDraft(text) as Draft, readSteps(text))).toBe(text);
  });

  it('without steps is kept as it always was', () => {
    expect(draftText(draft)).toBe(JSON.stringify(draft));
    expect(readSteps(JSON.stringify(draft))).toEqual({ done: [], undone: [] });
  });

  it('of many long steps loses the oldest of them, never itself', () => {
    const long = (n: number) => step(`${n} ${'x'.repeat(20_000)}`);
    const text = draftText(draft, { done: Array.from({ length: 40 }, (_, n) => long(n)), undone: [] });
    const { done } = readSteps(text);
    expect(text.length).toBeLessThan(200_000);
    expect(done.length).toBeGreaterThan(3);
    expect(done.at(-1)?.draft.plan.title).toMatch(/^39 /);
    expect(readDraft(text)).toEqual(draft);
  });

  it.each(['not JSON', '{"format":"steelyard-draft/2"}', '[]'])(
    'is none where the text is none of ours: %s',
    (text) => {
      expect(readDraft(text)).toBeNull();
      expect(readSteps(text)).toEqual({ done: [], undone: [] });
    },
  );

  it.each(['{"format":"steelyard-draft/1","steps":3}', '{"format":"steelyard-draft/1","steps":{"done":"x"}}'])(
    'whose steps are unreadable stands without them: %s',
    (text) => expect(readSteps(text)).toEqual({ done: [], undone: [] }),
  );
});
