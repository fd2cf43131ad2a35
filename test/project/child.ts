// Changes a project as fast as it can and writes the number of each change that was accepted: `node child.ts FILE`.
import { writeSync } from 'node:fs';
import type { Plan } from '@core/protocol/plan';
import './rooms.ts';

const { openProject } = (await import('@main/project/project')) as typeof import('@main/project/project');

const opened = openProject(process.argv[2] as string);
if (!opened.ok) throw new Error(JSON.stringify(opened.problems));
const project = opened.value;
const kept = project.plans()[0];
if (kept === undefined) throw new Error('no plan');
const plan = JSON.parse(kept.plan) as Plan;
for (let number = Number(plan.title) + 1; ; number++) {
  const changed = project.changePlan({
    planId: kept.planId,
    action: 'title',
    plan: { ...plan, title: String(number) },
  });
  if (!changed.ok) throw new Error(JSON.stringify(changed.problems));
  writeSync(1, `${number}\n`);
}
