import { join } from 'node:path';
import { readPlan } from '@core/index';
import type { Outcome } from '@core/protocol/outcome';
import { fromFolder, gather } from '../engine/inputs';
import { readPlanFile } from '../engine/run-plan';
import { inProject } from '../project/in-project';

/** Makes a project of the demo's plan and files. folder: that holds plan.json and the files that it names. */
export async function makeDemo(file: string, folder: string): Promise<Outcome<number>> {
  const text = readPlanFile(join(folder, 'plan.json'));
  if (!text.ok) return text;
  const plan = readPlan(text.value);
  if (!plan.ok) return plan;
  const { inputs } = gather(plan.value, fromFolder(folder));
  return inProject(file, {}, (project) =>
    project.together(async () => {
      for (const { bytes } of inputs) {
        const kept = project.keepInput(bytes);
        if (!kept.ok) return kept;
      }
      const named = inputs.map(({ name, sha256 }) => ({ name, sha256 }));
      return project.addPlan({ name: plan.value.title, plan: plan.value, inputs: named });
    }),
  );
}
