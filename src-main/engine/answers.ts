import { lookAtCells, prepareCells, readPlan, replaceData, reportOf } from '@core/index';
import { done, type Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import type { Hooks } from '@core/protocol/source';
import { printedReport, textOfResult } from './edition';
import { previewOf } from './preview';
import type { EngineAnswers, EngineAsks, EngineKind, PlanAsk } from './questions';
import { fitSources } from './run-plan';
import type { Shelf } from './shelf';

type Answering = {
  readonly [K in EngineKind]: (
    ask: EngineAsks[K],
    hooks: Hooks,
  ) => Outcome<EngineAnswers[K]> | Promise<Outcome<EngineAnswers[K]>>;
};

/** The engine's answers from the files on a shelf. Every refusal of data, model and fit is that of `run`. */
export function answersFrom(shelf: Shelf): Answering {
  const withSources = <T>({ plan, inputs }: PlanAsk, work: (of: PlanSources) => Outcome<T>): Outcome<T> => {
    const read = readPlan(plan);
    return read.ok ? work({ plan: read.value, sources: shelf.sourcesOf(read.value, inputs) }) : read;
  };
  return {
    preview: (ask) => done(previewOf({ ...ask, size: shelf.size(ask.sha256) }, shelf.table(ask))),
    look: (ask) => withSources(ask, lookAtCells),
    compare: ({ plan, before, after }) =>
      withSources({ plan, inputs: before }, (old) => {
        const used = prepareCells(old);
        const replaced = replaceData({ plan: old.plan, before: old.sources, after: shelf.sourcesOf(old.plan, after) });
        if (!replaced.ok) return replaced;
        const { added, lost, changed, cells } = replaced.value;
        return done({ added, lost, changed, used: { before: used.ok ? used.value.count : 0, after: cells.count } });
      }),
    run: (ask, hooks) => {
      hooks.progress('read', 0);
      return withSources(ask, (of) => {
        const result = fitSources({ ...of, hooks });
        return result.ok ? done(textOfResult(result.value)) : result;
      });
    },
    print: async ({ result: text, edition }) => {
      const result = JSON.parse(text) as Result;
      return done({ pdf: await printedReport(result, edition), document: reportOf({ result, edition }) });
    },
  };
}

interface PlanSources {
  readonly plan: Plan;
  readonly sources: ReturnType<Shelf['sourcesOf']>;
}
