import { join } from 'node:path';
import { done } from '@core/protocol/outcome';
import { coefficientLines } from '@core/words/coefficients';
import { runPlan } from '../engine/run-plan';
import type { Handlers } from './answer';

/** The demo's coefficients as lines of text. */
export const demoHandlers = (resources: string): Pick<Handlers, 'demo.coefficients'> => ({
  'demo.coefficients': async () => {
    const run = await runPlan({ planFile: join(resources, 'demo/plan.json') });
    if (!run.ok) return run;
    return done({ title: run.value.result.plan.title, lines: coefficientLines(run.value.result) });
  },
});
