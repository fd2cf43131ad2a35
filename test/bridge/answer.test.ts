import { sentence } from '@core/words/problems';
import { answering, type Handlers } from '@main/bridge/answer';
import { describe, expect, it } from 'vitest';
import { openWindow } from './window';

describe('the door of the window', () => {
  it('answers a known question of the program’s own page', async () => {
    const window = openWindow();
    expect(await window.askAnything('start.look', {})).toEqual({
      ok: true,
      value: { version: '0.1.0', recent: [], project: null },
    });
  });

  it.each([
    ['another page', 'https://elsewhere.invalid', 'start.look', {}, 'stranger'],
    ['a page without an origin', 'null', 'start.look', {}, 'stranger'],
    ['an unknown question', undefined, 'project.destroy', {}, 'unknown-kind'],
    ['a name that every object has', undefined, 'constructor', {}, 'unknown-kind'],
    ['the prototype', undefined, '__proto__', {}, 'unknown-kind'],
    ['a payload of another shape', undefined, 'start.look', 'x', 'wrong-type'],
    ['a surplus key', undefined, 'start.look', { force: true }, 'wrong-type'],
    ['a number that is none', undefined, 'fit.ask', { planId: Number.NaN }, 'wrong-type'],
    ['a hash that is none', undefined, 'data.preview', { name: 'a', sha256: '../x', read: {} }, 'wrong-type'],
    ['bytes that are a text', undefined, 'data.take', { name: 'a.csv', bytes: 'a,b' }, 'wrong-type'],
    ['a payload of another realm', undefined, 'data.take', { name: 'a.csv', bytes: { length: 3 } }, 'wrong-type'],
  ])('refuses %s by code and in words', async (_, origin, question, payload, code) => {
    const answer = await openWindow().askAnything(question, payload, origin);
    if (answer.ok) throw new Error('answered');
    expect(answer.problems.map((problem) => problem.code)).toEqual([code]);
    for (const problem of answer.problems) expect(sentence(problem).length).toBeGreaterThan(10);
  });

  it('turns a bug of a handler into a fault of ours', async () => {
    const slip = async () => {
      throw new Error('a slip');
    };
    const broken = answering('app://steelyard', { 'start.look': slip } as unknown as Handlers);
    expect(await broken('app://steelyard', 'start.look', {})).toMatchObject({
      ok: false,
      problems: [{ code: 'fault-of-ours', facts: { message: 'a slip' } }],
    });
  });
});
