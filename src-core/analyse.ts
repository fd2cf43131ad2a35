import { unavailable } from './available';
import type { Fitted } from './estimate/fitted';
import { beamOf } from './evidence/beam';
import { bootstrapsOf, withBootstraps } from './evidence/bootstraps';
import { breakEvenOf } from './evidence/break-even';
import { carriedByOf } from './evidence/carried-by';
import { cautionsOf } from './evidence/cautions';
import { cellResultsOf } from './evidence/cell-results';
import { commonCorrelationOf } from './evidence/common-correlation';
import { exponentScanOf } from './evidence/exponent-scan';
import { judgeOf } from './evidence/judge';
import { limitsOf } from './evidence/limits';
import { overturnOf } from './evidence/overturn';
import { pricesOf, squareOf } from './evidence/price';
import { selfChecksOf } from './evidence/self-checks';
import { structureEvidence } from './evidence/structure-evidence';
import { whatItTakesOf } from './evidence/what-it-takes';
import { betweenRulesOf } from './inference/between-rules';
import { checkModel, type Model } from './inference/check-model';
import { fitResultOf } from './inference/fit-result';
import { fitChosen, fitRivals, type RivalFit } from './inference/fits';
import { individualLevelOf } from './inference/individual-level';
import { inferenceOf } from './inference/inferred';
import { intraclassOf } from './inference/intraclass';
import { likelihoodsOf } from './inference/likelihoods';
import { questionsOf } from './inference/questions';
import { robustBeside } from './inference/robust-beside';
import { done, type Outcome, refuse, refuseAll } from './protocol/outcome';
import type { Plan } from './protocol/plan';
import type { Result } from './protocol/result';
import type { Hooks } from './protocol/source';
import type { Cells } from './table/cells';
import { VERSION } from './version';

/**
 * The whole path from a plan and its used cells to the result.
 *
 * cells: from `prepareCells`. Refuses what this version does not fit (`not-available`, every such key and kind), what the model stage refuses,
 * and a likelihood whose maximum was not found. The same plan and cells give the same result to the last bit, on any machine.
 */
export function analyse(asked: { readonly plan: Plan; readonly cells: Cells; readonly hooks: Hooks }): Outcome<Result> {
  const { plan, hooks } = asked;
  const absent = unavailable(plan);
  const model = checkModel(asked);
  if (absent.length > 0) return refuseAll(model.ok ? absent : [...absent, ...model.problems]);
  if (!model.ok) return model;

  hooks.progress('fit', 0.1);
  const fitted = fitChosen({ plan, hooks, model: model.value });
  if (!fitted.ok) return fitted;
  const rivals = fitRivals({ plan, hooks: within(hooks, 0.15, 0.3), model: model.value, chosen: fitted.value });
  if (!rivals.ok) return rivals;
  return resultOf({ ...asked, model: model.value, fitted: fitted.value, rivals: rivals.value });
}

/** Hooks for a part of the path: its own share of 0 to 1 as a share of the whole. */
function within(hooks: Hooks, from: number, to: number): Hooks {
  return { cancelled: hooks.cancelled, progress: (step, share) => hooks.progress(step, from + (to - from) * share) };
}

function resultOf(fits: {
  readonly plan: Plan;
  /** As the data stage left them, before any outcome scale. */
  readonly cells: Cells;
  readonly model: Model;
  readonly fitted: Fitted;
  readonly rivals: readonly RivalFit[];
  readonly hooks: Hooks;
}): Outcome<Result> {
  const { plan, model, fitted, rivals, hooks } = fits;
  const { cells, known, design } = model;
  const { level } = plan.inference;
  const inferred = inferenceOf({ fitted, cells, plan, hooks });
  if (!inferred.ok) return inferred;
  const likelihoods = likelihoodsOf(fitted);
  const { coefficients } = inferred.value;
  hooks.progress('evidence', 0.3);
  const tested = structureEvidence({ fitted, cells, plan, design, hooks: within(hooks, 0.3, 0.55) });
  const bootstraps = bootstrapsOf({ fitted, evidence: tested, hooks: within(hooks, 0.55, 0.6) });
  hooks.progress('sensitivity', 0.6);
  const scan = exponentScanOf({ fitted, cells, plan, hooks: within(hooks, 0.6, 0.65) });
  const limits = limitsOf({ ...fits, coefficients, hooks: within(hooks, 0.65, 0.7) });
  const evidence = withBootstraps(tested, bootstraps);
  const pieces = {
    data: cells.data,
    fit: fitResultOf({
      fitted,
      inferred: inferred.value,
      cells,
      plan,
      carriedBy: carriedByOf({ fitted, cells, plan }),
      likelihoods,
      hooks: within(hooks, 0.7, 0.72),
    }),
    robustBeside: robustBeside(fitted),
    ...cellResultsOf({ fitted, cells }),
    beside: pricesOf({ fitted, rivals }),
    evidence,
    betweenRules: betweenRulesOf(fitted, level, hooks),
    beam: beamOf({ fitted, labels: cells.labels, judge: judgeOf(cells, plan) }),
    overturn: overturnOf({
      ...{ fitted, cells, plan, coefficients, rivals, ends: scan.ends, limits: limits.changes },
      hooks: within(hooks, 0.72, 0.8),
    }),
    selfChecks: selfChecksOf({ fitted, cells, plan, rivals, hooks: within(hooks, 0.8, 0.9) }),
  };
  if (hooks.cancelled()) return refuse('cancelled', {});
  hooks.progress('report', 0.9);
  return done({
    format: 'steelyard-result/1',
    plan,
    data: pieces.data,
    fit: pieces.fit,
    robustBeside: pieces.robustBeside,
    individualLevel: individualLevelOf({ plan, cells, design, response: model.response }),
    cells: pieces.cells,
    effectiveCells: pieces.effectiveCells,
    beside: pieces.beside,
    square: squareOf([fitted, ...rivals.map((rival) => rival.fitted)]),
    breakEven: breakEvenOf({ fitted, cells }),
    intraclass: intraclassOf(likelihoods, level),
    evidence,
    betweenRules: pieces.betweenRules,
    questions: questionsOf({ plan, fitted, inferred: inferred.value, known, cells }),
    beam: pieces.beam,
    exponentScan: scan.scan,
    exponentSupport: scan.support,
    bounds: limits.bounds,
    commonCorrelation: commonCorrelationOf({ fitted, plan }),
    whatItTakes: whatItTakesOf({ fitted, plan, coefficients }),
    bootstrapTau2: bootstraps.length > 0 ? bootstraps : null,
    overturn: pieces.overturn,
    selfChecks: pieces.selfChecks,
    cautions: cautionsOf({
      plan,
      cells,
      fitted,
      pieces: { ...pieces, bounds: limits.bounds },
      hardlySeparate: model.hardlySeparate,
      limits: limits.facts,
    }),
    made: { version: VERSION },
  });
}
