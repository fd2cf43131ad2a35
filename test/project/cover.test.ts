import { describe, expect, it } from 'vitest';
import { constant, newProject, perSize, planCalled, resultText, taken } from './support';

describe('a covered answer', () => {
  it('is covered by name, uncovered by name, and both stand in the trail', () => {
    const { project } = newProject();
    expect(project.isAnswerCovered()).toBe(false);
    taken(project.coverAnswer({ author: 'Ada' }));
    expect(project.isAnswerCovered()).toBe(true);
    taken(project.uncoverAnswer({ author: 'Ben' }));
    expect(project.isAnswerCovered()).toBe(false);
    const told = project.trail().map(({ action, author }) => `${action} ${author}`);
    expect(told.slice(-2)).toEqual(['answer-covered Ada', 'answer-uncovered Ben']);
    expect(taken(project.verifyTrail()).entries).toBe(project.trail().length);
  });

  it('counts a structure as tried with the answer in view unless it was covered at that time', () => {
    const { project, planId } = newProject();
    const keep = (title: string, slope: number, variance = perSize) =>
      taken(project.keepFit({ planId, result: resultText({ plan: planCalled(title, variance), slope }) }));
    keep('in view', 1);
    taken(project.coverAnswer({ author: 'Ada' }));
    keep('covered', 2, constant);
    taken(project.uncoverAnswer({ author: 'Ada' }));
    expect(project.structuresTried()).toMatchObject({ count: 2, before: 1, after: 1 });
  });
});
