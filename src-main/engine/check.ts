import { done, type Outcome, refuse } from '@core/protocol/outcome';
import type { Hooks } from '@core/protocol/source';
import { type CheckReport, checkProject } from '../project/check-project';
import { printedReport, textOfResult } from './edition';
import { runText, unhurried } from './run-plan';

/** Verifies a project and makes every edition again from the plan and the bytes that it holds: see `checkProject`. */
export function checkProjectFile(file: string, hooks: Hooks = unhurried): Promise<Outcome<CheckReport>> {
  return checkProject(file, async (edition, bytesOf) => {
    await new Promise((turn) => setImmediate(turn)); // a signal that came meanwhile is heard here
    if (hooks.cancelled()) return refuse('cancelled', {});
    const run = runText({
      text: edition.plan,
      fetch: (name, at) => {
        const bytes = bytesOf(name);
        return bytes === null ? refuse('file-not-found', { file: name }, at) : done(bytes);
      },
      hooks,
    });
    if (!run.ok) return run;
    const { result } = run.value;
    return done({ result: textOfResult(result), report: () => printedReport(result, edition.facts) });
  });
}
