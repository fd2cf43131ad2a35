import { lookAtCells, prepareCells, readPlan, replaceData, reportOf } from '@core/index';
import { packLook } from '@core/protocol/data-look';
import { done, type Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import type { Hooks } from '@core/protocol/source';
import { printed, textOfResult } from './edition';
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
    preview: (ask, hooks) => {
      hooks.progress('read', 0);
      return done(previewOf({ ...ask, size: shelf.size(ask.sha256) }, shelf.table(ask)));
    },
    look: (ask, hooks) => {
      hooks.progress('read', 0);
      return withSources(ask, (of) => {
        hooks.progress('look', 0.4);
        const look = lookAtCells(of);
        return look.ok ? done(packLook(look.value)) : look;
      });
    },
    compare: ({ plan, before, after }, hooks) => {
      hooks.progress('read', 0);
      return withSources({ plan, inputs: before }, (old) => {
        hooks.progress('compare', 0.3);
        const used = prepareCells(old);
        const replaced = replaceData({ plan: old.plan, before: old.sources, after: shelf.sourcesOf(old.plan, after) });
        if (!replaced.ok) return replaced;
        const { added, lost, changed, cells } = replaced.value;
        return done({ added, lost, changed, used: { before: used.ok ? used.value.count : 0, after: cells.count } });
      });
    },
    run: (ask, hooks) => {
      hooks.progress('read', 0);
      return withSources(ask, (of) => {
        const result = fitSources({ ...of, hooks });
        return result.ok ? done(textOfResult(result.value)) : result;
      });
    },
    print: async ({ result: text, edition, notes }, hooks) => {
      hooks.progress('report', 0);
      const result = JSON.parse(text) as Result;
      const document = reportOf({ result, edition, ...(notes ? { notes } : {}) });
      return done({
        pdf: await printed(document, { result, edition }, (share) => hooks.progress('report', share)),
        document,
      });
    },
  };
}

interface PlanSources {
  readonly plan: Plan;
  readonly sources: ReturnType<Shelf['sourcesOf']>;
}
