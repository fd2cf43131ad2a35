import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import type { Asked } from '@core/protocol/bridge';
import { sentence } from '@core/words/problems';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { folder, openWindow, smallCells, smallPlan, take, taken, withProject } from './window';

/** Every question of the table; a new one does not compile until it stands here. */
const questions: { readonly [Q in Asked]: readonly string[] } = {
  'start.look': [],
  'start.forget': [],
  'project.demo': [],
  'project.create': [],
  'project.open': ['file'],
  'project.save-as': [],
  'project.close': [],
  'project.look': [],
  'data.choose': [],
  'data.take': ['name', 'bytes'],
  'data.preview': ['name', 'sha256', 'read'],
  'data.look': ['plan', 'inputs'],
  'data.compare': ['planId', 'inputs'],
  'plan.add': ['name', 'plan', 'inputs'],
  'plan.change': ['planId', 'action', 'plan', 'inputs'],
  'plan.rename': ['planId', 'name'],
  'plan.undo': [],
  'plan.redo': [],
  'draft.keep': ['text'],
  'fit.ask': ['planId'],
  'fit.try': ['plan', 'inputs'],
  'fit.latest': ['planId'],
  'job.cancel': ['job'],
  'answer.cover': ['author'],
  'answer.uncover': ['author'],
  'report.pages': ['planId', 'edition'],
  'report.note': ['place', 'text', 'author'],
  'report.decide': ['author', 'text'],
  'report.freeze': ['planId', 'author'],
  'report.check': ['edition'],
  'report.sign-off': ['edition', 'role', 'author'],
  'trail.read': [],
  'keep.text': ['suggested', 'text'],
  'keep.bytes': ['suggested', 'bytes'],
  'keep.copy': ['text', 'html'],
};

const sha256 = fc.constantFrom('0'.repeat(64), 'a'.repeat(64), 'A'.repeat(64), '../../etc/passwd', '');
const anything = fc.oneof(
  fc.anything({ withBigInt: true, withDate: true, withMap: true, withTypedArray: true, withNullPrototype: true }),
  fc.json().map((text) => JSON.parse(text) as unknown),
);
const likely: Readonly<Record<string, fc.Arbitrary<unknown>>> = {
  planId: fc.constantFrom(1, 2, -1, 0, 2 ** 53),
  edition: fc.constantFrom(null, 0, 1, -1),
  job: fc.integer(),
  file: fc.oneof(fc.constantFrom(null, '/etc/passwd', '', '\0', 'care.steelyard'), fc.string()),
  name: fc.string(),
  action: fc.string(),
  author: fc.string({ unit: 'binary' }),
  role: fc.string({ unit: 'binary' }),
  place: fc.string({ unit: 'binary' }),
  text: fc.oneof(fc.constant(null), fc.string({ unit: 'binary' })),
  html: fc.oneof(fc.constant(null), fc.string()),
  suggested: fc.string({ unit: 'binary' }),
  bytes: fc.uint8Array({ maxLength: 300 }),
  sha256,
  read: fc.oneof(anything, fc.constantFrom({}, null, { delimiter: '' }, { group: ',', delimiter: ',' })),
  inputs: fc.oneof(fc.constant(null), fc.array(fc.record({ name: fc.string(), sha256 }), { maxLength: 3 })),
  plan: fc.oneof(
    anything,
    fc.constantFrom(
      smallPlan(),
      smallPlan({ terms: 3 }),
      smallPlan({ variance: null }),
      smallPlan({ title: '\ud800' }),
    ),
  ),
};

const payloadOf = (question: Asked) =>
  fc.oneof(
    { weight: 1, arbitrary: anything },
    {
      weight: 4,
      arbitrary: fc.record(
        Object.fromEntries(
          questions[question].map((key) => [key, fc.oneof(likely[key] as fc.Arbitrary<unknown>, anything)]),
        ),
      ),
    },
    {
      weight: 4,
      arbitrary: fc.record(
        Object.fromEntries(questions[question].map((key) => [key, likely[key] as fc.Arbitrary<unknown>])),
      ),
    },
  );

const asked = fc
  .constantFrom(...(Object.keys(questions) as Asked[]))
  .chain((question) => payloadOf(question).map((payload) => ({ question, payload })));

describe('whatever a page sends', () => {
  it.each([
    ['without a project', false],
    ['with one open', true],
  ])('%s, an outcome comes back, every refusal has its sentence, and the door stays open', async (_, isOpen) => {
    const window = openWindow();
    if (isOpen) {
      await withProject(window);
      const inputs = [await take(window, 'cells.csv', smallCells)];
      taken(await window.ask('plan.add', { name: 'Main', plan: smallPlan(), inputs }));
    }
    mkdirSync(join(window.profile, 'x'), { recursive: true });
    await fc.assert(
      fc.asyncProperty(asked, async ({ question, payload }) => {
        // Closing and demos are for other tests: here what is open stays.
        if (['project.close', 'project.demo'].includes(question)) return;
        const answer = await window.askAnything(question, payload);
        if (answer.ok) return;
        for (const problem of answer.problems) {
          expect(problem.code, JSON.stringify(problem.facts)).not.toBe('fault-of-ours');
          expect(sentence(problem).length).toBeGreaterThan(10);
        }
      }),
      { numRuns: 400, seed: 20261201, endOnFailure: true },
    );
    const look = taken(await window.ask('project.look', {}));
    expect(look === null).toBe(!isOpen);
    if (isOpen) expect(taken(await window.ask('trail.read', {})).problems).toEqual([]);
    for (const told of window.told)
      if (told.kind === 'done' && !told.outcome.ok) expect(told.outcome.problems[0]?.code).not.toBe('fault-of-ours');
  });

  it('a name of a question that is none is refused, whatever it is', async () => {
    const window = openWindow();
    await fc.assert(
      fc.asyncProperty(fc.string({ unit: 'binary' }), anything, async (question, payload) => {
        fc.pre(!Object.hasOwn(questions, question));
        expect(await window.askAnything(question, payload)).toMatchObject({
          ok: false,
          problems: [{ code: 'unknown-kind' }],
        });
      }),
      { numRuns: 200, seed: 20261202 },
    );
  });

  it('a path from the page opens nothing', async () => {
    const window = openWindow();
    await fc.assert(
      fc.asyncProperty(fc.string({ unit: 'binary' }), async (file) => {
        expect(await window.ask('project.open', { file: join(folder(), file) })).toMatchObject({ ok: false });
      }),
      { numRuns: 50, seed: 20261203 },
    );
  });
});
