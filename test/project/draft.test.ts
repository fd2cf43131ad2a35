import { copyFileSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { openProject } from '@main/project/project';
import { sha256Of } from '@main/project/sha256';
import { expect, it } from 'vitest';
import { bytes, codeOf, folder, newProject, planCalled, taken } from './support';

const cells = bytes('parish,y\nElm in the confidential draft,1\n');
const sha256 = sha256Of(cells);
const bytesOf = (wanted: string) => (wanted === sha256 ? cells : null);

it('a draft is one text, kept with the files that it names, and no entry of the trail', () => {
  const { project } = newProject();
  expect([project.draft(), project.hasDraftInput(sha256)]).toEqual([null, false]);
  const [head, ways] = [project.trailHead(), project.ways()];
  expect(codeOf(project.keepDraft({ text: `first ${sha256}`, bytesOf }))).toBe('ok');
  expect(codeOf(project.keepDraft({ text: `second ${sha256}, ${'0'.repeat(64)}`, bytesOf: () => null }))).toBe('ok');
  expect(project.draft()).toMatch(/^second/);
  expect(project.draftBytes(sha256)).toEqual(Buffer.from(cells));
  expect([project.trailHead(), project.ways()]).toEqual([head, ways]);
});

it('a draft that is taken out leaves no byte of its files in the project', () => {
  const { project, file } = newProject();
  taken(project.keepDraft({ text: sha256, bytesOf }));
  const confidential = 'Elm in the confidential draft';
  expect(readFileSync(file).includes(confidential)).toBe(true);
  taken(project.keepDraft({ text: null, bytesOf }));
  expect([project.draft(), project.hasDraftInput(sha256)]).toEqual([null, false]);
  project.close();
  expect(readFileSync(file).includes(confidential)).toBe(false);
});

it('a file that a plan has is not kept for the draft a second time', () => {
  const { project } = newProject();
  taken(project.keepInput(cells));
  taken(project.keepDraft({ text: sha256, bytesOf }));
  expect([project.hasInput(sha256), project.hasDraftInput(sha256)]).toEqual([true, false]);
});

it('a project of layout 10 takes drafts once it was brought forward, and its own entries stay', () => {
  const file = join(folder(), 'old.steelyard');
  copyFileSync(join(import.meta.dirname, 'frozen/v10.steelyard'), file);
  const project = taken(openProject(file));
  taken(project.keepDraft({ text: 'on its way', bytesOf }));
  expect([project.draft(), project.trail().length, codeOf(project.verifyTrail())]).toEqual(['on its way', 10, 'ok']);
  project.close();
});

it('a project opened alone is refused to everyone else until it is closed', () => {
  const { project, file } = newProject({ alone: true });
  for (const readonly of [false, true])
    expect(openProject(file, { readonly, patience: 50 })).toEqual({
      ok: false,
      problems: [{ code: 'file-in-use', at: null, facts: { file } }],
    });
  taken(project.addPlan({ name: 'Second', plan: planCalled('1'), inputs: [] }));
  expect(codeOf(openProject(file, { patience: 50 }))).toBe('file-in-use');
  project.close();
  const next = taken(openProject(file, { patience: 50 }));
  expect(next.plans().map(({ name }) => name)).toContain('Second');
  next.close();
});

it('fits of a plan are listed, the last first, with their states and the version that made them', () => {
  const { project, planId } = newProject();
  const keep = (slope: number) =>
    taken(project.keepFit({ planId, result: `${JSON.stringify({ ...result, slope })}\n` }));
  const state = project.plans().find((plan) => plan.planId === planId)?.stateId;
  const [one, two] = [keep(1), keep(2)];
  expect(project.fitsOf(planId)).toEqual([
    { fit: two, stateId: state, version: '0.1.0' },
    { fit: one, stateId: state, version: '0.1.0' },
  ]);
  expect(JSON.parse(project.fitText(two) as string)).toMatchObject({ slope: 2 });
  expect([project.fitsOf(99), project.fitText(99)]).toEqual([[], null]);
});

const result = {
  plan: planCalled('0'),
  fit: { coefficients: [{ term: 'x', estimate: 1 }] },
  beside: [],
  made: { version: '0.1.0' },
};
