import { type Covariance, independent } from '@core/algebra/covariance';
import { fitStructure } from '@core/estimate/fit';
import type { Fitted } from '@core/estimate/fitted';
import { betweenRulesOf } from '@core/inference/between-rules';
import { fitResultOf } from '@core/inference/fit-result';
import { type Inferred, inferenceOf } from '@core/inference/inferred';
import { intraclassOf } from '@core/inference/intraclass';
import { likelihoodsOf } from '@core/inference/likelihoods';
import { questionsOf } from '@core/inference/questions';
import { robustBeside } from '@core/inference/robust-beside';
import type { Design } from '@core/model/design';
import { designOf } from '@core/model/design';
import type { KnownTerm } from '@core/model/known-terms';
import { learnTerms } from '@core/model/learn-terms';
import { omegaAt } from '@core/model/structure';
import { structureOf } from '@core/model/structure-of';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { Result } from '@core/protocol/result';
import type { Cells } from '@core/table/cells';
import { type CaseFit, cellsFrom, loadCase, planOf } from '../support/case';

export function must<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

export interface Fit {
  readonly plan: Plan;
  readonly cells: Cells;
  readonly known: KnownTerm[];
  readonly design: Design;
  readonly fitted: Fitted;
}

/** A plan fitted on cells, without the rooms before and after. */
export function fitOf(plan: Plan, cells: Cells): Fit {
  const known = must(learnTerms({ terms: plan.terms, intercept: plan.intercept, cells }));
  const design = must(designOf(known, cells));
  const structure = must(structureOf({ variance: plan.variance, cells }));
  const { estimate } = plan;
  const fitted = must(
    fitStructure({ response: cells.outcome, design, structure, estimate, weighting: weightingOf(plan, cells) }),
  );
  return { plan, cells, known, design, fitted };
}

function weightingOf({ target }: Plan, cells: Cells): Covariance | 'diagonal' | null {
  if (target === 'structure') return null;
  if (target === 'diagonal') return 'diagonal';
  if (target === 'cells') return independent(new Float64Array(cells.count).fill(1));
  if (target === 'persons') return independent((cells.size as Float64Array).map((n) => 1 / n));
  return omegaAt(must(structureOf({ variance: target, cells })), new Float64Array([1]));
}

export type Parts = Pick<Result, 'fit' | 'robustBeside' | 'questions' | 'betweenRules' | 'intraclass'>;

export function partsOf(fit: Fit): Parts & { readonly inferred: Inferred } {
  const { plan, cells, fitted, known } = fit;
  const { level } = plan.inference;
  const inferred = must(inferenceOf({ fitted, cells, plan }));
  const likelihoods = likelihoodsOf(fitted);
  return {
    inferred,
    fit: fitResultOf({ fitted, inferred, cells, plan, carriedBy: [], likelihoods }),
    robustBeside: robustBeside(fitted),
    questions: questionsOf({ plan, fitted, inferred, known, cells }),
    betweenRules: betweenRulesOf(fitted, level),
    intraclass: intraclassOf(likelihoods, level),
  };
}

/** A plan in few words for tests on tables made by hand. */
export function planFor(said: {
  readonly outcome: string;
  readonly terms: Plan['terms'];
  readonly parts: Plan['variance']['parts'];
  readonly size?: string;
  readonly error?: string;
  readonly intercept?: boolean;
  readonly fixed?: Record<string, number>;
  readonly estimate?: Plan['estimate'];
  readonly inference?: Plan['inference'];
  readonly target?: Plan['target'];
  readonly questions?: Plan['questions'];
}): Plan {
  const any = loadCase('hand-per-size');
  const plan = planOf(any, any.fits[0] as CaseFit);
  return {
    ...plan,
    roles: { ...plan.roles, label: null, outcome: said.outcome, size: said.size ?? null, error: said.error ?? null },
    terms: said.terms,
    intercept: said.intercept ?? true,
    variance: { parts: said.parts, fixed: said.fixed ?? {} },
    estimate: said.estimate ?? { method: 'least-squares' },
    inference: said.inference ?? { kind: 'model', level: 0.95 },
    target: said.target ?? 'structure',
    questions: said.questions ?? [],
  };
}

/** Cells of a table made by hand, column by column. */
export function withTable(columns: Record<string, readonly (number | string)[]>): (plan: Plan) => Cells {
  const names = Object.keys(columns);
  const count = columns[names[0] as string]?.length ?? 0;
  const lines = Array.from({ length: count }, (_, g) => names.map((name) => columns[name]?.[g]).join(','));
  return (plan) => cellsFrom([names.join(','), ...lines].join('\n'), plan);
}
