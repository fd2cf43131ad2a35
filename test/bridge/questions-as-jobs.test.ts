import type { Asked, Heard } from '@core/protocol/bridge';
import { describe, expect, it } from 'vitest';
import { codesOf, manyCells, openWindow, smallPlan, type TestWindow, take, taken, withProject } from './window';

const plan = smallPlan({ roles: { label: ['cell'], outcome: 'y', size: 'n' } });

/** The number of the job that answers a question, once it has begun. */
async function begun(window: TestWindow, question: Asked): Promise<number> {
  const of = (told: Heard) => told.kind === 'begun' && told.question === question;
  await expect.poll(() => window.told.some(of), { interval: 2, timeout: 20_000 }).toBe(true);
  return (window.told.findLast(of) as Extract<Heard, { kind: 'begun' }>).job;
}

const ofJob = (window: TestWindow, job: number) =>
  window.told.flatMap((told) => ('job' in told && told.job === job ? [told.kind] : []));

async function withCells(count: number) {
  const window = openWindow();
  await withProject(window);
  return { window, inputs: [await take(window, 'cells.csv', manyCells(count))] };
}

async function withFit(count: number) {
  const { window, inputs } = await withCells(count);
  const { planId, job } = taken(await window.ask('plan.add', { name: 'Main', plan, inputs }));
  await window.resultOf(job);
  return { window, planId };
}

const entries = async (window: TestWindow) => taken(await window.ask('trail.read', {})).entries.length;

describe('a question that may take long is a job', () => {
  it('that tells when it begins, how far it is and when it ends, before its answer', async () => {
    const { window, inputs } = await withCells(500);
    const answer = window.ask('data.look', { plan, inputs });
    const job = await begun(window, 'data.look');
    expect(taken(await answer).used).toBe(500);
    const kinds = ofJob(window, job);
    expect([kinds[0], kinds.at(-1)]).toEqual(['begun', 'ended']);
    expect(kinds.slice(1, -1).every((kind) => kind === 'progress') && kinds.length > 2).toBe(true);
  });

  it.each<[Asked, (window: TestWindow, planId: number) => Promise<unknown>]>([
    ['report.pages', (window, planId) => window.ask('report.pages', { planId, edition: null })],
    ['report.freeze', (window, planId) => window.ask('report.freeze', { planId, author: 'Ada' })],
  ])('that is stopped by its number, answers at once and keeps nothing: %s', async (question, ask) => {
    const { window, planId } = await withFit(1500);
    const before = await entries(window);
    const answer = ask(window, planId) as Promise<never>;
    const job = await begun(window, question);
    await expect.poll(() => ofJob(window, job).includes('progress'), { interval: 2, timeout: 20_000 }).toBe(true);
    const asked = performance.now();
    taken(await window.ask('job.cancel', { job }));
    expect(codesOf(await answer)).toEqual(['cancelled']);
    expect(performance.now() - asked).toBeLessThan(1000);
    expect(ofJob(window, job).filter((kind) => kind === 'ended')).toHaveLength(1);
    expect(await entries(window)).toBe(before);
    expect(taken(await window.ask('project.look', {}))?.editions).toEqual([]);
    // It goes on as if nothing had been asked.
    expect(taken(await window.ask('report.freeze', { planId, author: 'Ada' })).number).toBe(1);
  });

  it('that is stopped while an edition is made again leaves the edition as it stands', async () => {
    const { window, planId } = await withFit(1500);
    taken(await window.ask('report.freeze', { planId, author: 'Ada' }));
    const answer = window.ask('report.check', { edition: 1 });
    const job = await begun(window, 'report.check');
    taken(await window.ask('job.cancel', { job }));
    expect(codesOf(await answer)).toEqual(['cancelled']);
    expect(taken(await window.ask('report.check', { edition: 1 })).problems).toEqual([]);
  });

  it('that is stopped while a file is read leaves the program ready for the next', async () => {
    const window = openWindow();
    await withProject(window);
    const bytes = new TextEncoder().encode(manyCells(60_000));
    const answer = window.ask('data.take', { name: 'cells.csv', bytes });
    const job = await begun(window, 'data.take');
    taken(await window.ask('job.cancel', { job }));
    expect(codesOf(await answer)).toEqual(['cancelled']);
    expect((await window.ask('data.look', { plan, inputs: [await take(window, 'cells.csv', manyCells(9))] })).ok).toBe(
      true,
    );
  });

  it('ends with the project: whoever closes it waits for nothing', async () => {
    const { window, inputs } = await withCells(60_000);
    const answer = window.ask('data.look', { plan, inputs });
    await begun(window, 'data.look');
    await window.close();
    expect(codesOf(await answer)).toEqual(['cancelled']);
  });
});
