import type { ProjectLook } from '@core/protocol/bridge';
import type { Plan } from '@core/protocol/plan';
import type { OpenProject } from './open-project';
import { projectName } from './recent';

/** A project as the window shows it. */
export function projectLook({ project, file, readonly }: OpenProject): ProjectLook {
  const { count, before, after } = project.structuresTried();
  const covered = project.isAnswerCovered();
  const uncovered = covered ? undefined : project.trail('answer-uncovered').at(-1);
  return {
    name: projectName(file),
    file,
    readonly,
    plans: project.plans().map(({ planId, name, plan, inputs }) => ({
      planId,
      name,
      plan: JSON.parse(plan) as Plan,
      inputs,
    })),
    ...project.ways(),
    draft: project.draft(),
    covered,
    uncovered: uncovered === undefined ? null : { author: uncovered.author ?? '', time: uncovered.time },
    decisions: project.decisions(),
    notes: project.notes(),
    editions: editionsOf(project),
    structuresTried: { count, before, after },
  };
}

function editionsOf(project: OpenProject['project']): ProjectLook['editions'] {
  const signOffs = project.signOffs();
  return project.editionHeads().map(({ facts: { number, time, author }, title }) => ({
    number,
    time,
    author,
    title,
    signOffs: signOffs
      .filter(({ edition }) => edition === number)
      .map(({ role, author: by, time: at }) => ({ role, author: by, time: at })),
  }));
}
