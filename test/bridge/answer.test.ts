import { done } from '@core/protocol/outcome';
import { sentence } from '@core/words/problems';
import { answering } from '@main/bridge/answer';
import { describe, expect, it } from 'vitest';

const ask = answering('app://steelyard', {
  'demo.coefficients': async () => done({ title: 'Demo', lines: ['one line'] }),
});

describe('the door of the window', () => {
  it('answers a known question of the program’s own page', async () => {
    expect(await ask('app://steelyard', 'demo.coefficients', {})).toEqual(done({ title: 'Demo', lines: ['one line'] }));
  });

  it.each([
    ['another page', 'https://elsewhere.invalid', 'demo.coefficients', {}, 'stranger'],
    ['an unknown question', 'app://steelyard', 'constructor', {}, 'unknown-kind'],
    ['a payload of another shape', 'app://steelyard', 'demo.coefficients', 'x', 'wrong-type'],
    ['a surplus key', 'app://steelyard', 'demo.coefficients', { force: true }, 'wrong-type'],
  ])('refuses %s by code and in words', async (_, origin, question, payload, code) => {
    const answer = await ask(origin, question, payload);
    if (answer.ok) throw new Error('answered');
    expect(answer.problems.map((problem) => problem.code)).toEqual([code]);
    for (const problem of answer.problems) expect(sentence(problem).length).toBeGreaterThan(10);
  });

  it('turns a bug of a handler into a fault of ours', async () => {
    const broken = answering('app://steelyard', {
      'demo.coefficients': () => Promise.reject(new Error('a slip')),
    });
    expect(await broken('app://steelyard', 'demo.coefficients', {})).toMatchObject({
      ok: false,
      problems: [{ code: 'fault-of-ours', facts: { message: 'a slip' } }],
    });
  });
});
