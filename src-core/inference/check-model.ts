import { type Identification, identificationOf } from '../estimate/identified';
import { clustersThatCut } from '../model/check';
import { type Design, designOf } from '../model/design';
import type { KnownTerm } from '../model/known-terms';
import { learnTerms } from '../model/learn-terms';
import { type OnScale, onOutcomeScale } from '../model/outcome-scale';
import type { Structure } from '../model/structure';
import { structureOf } from '../model/structure-of';
import { done, type Outcome, refuseAll } from '../protocol/outcome';
import type { Plan, Rival } from '../protocol/plan';
import type { Problem } from '../protocol/problems';
import type { Cells } from '../table/cells';
import { checkClustersOf } from './check-clusters';
import { checkLeverageOf } from './check-leverage';
import { checkQuestions } from './check-questions';

/** What the model stage made of a plan and its cells. */
export interface Model extends OnScale {
  readonly known: readonly KnownTerm[];
  readonly design: Design;
  readonly chosen: Structure;
  /** Whose weights the estimator takes, where the target is a structure of its own; else null. */
  readonly target: Structure | null;
  readonly rivals: readonly Structure[];
  readonly hardlySeparate: Identification['hardlySeparate'];
}

/**
 * The model stage: terms and structures on the used cells, everything short of the fit.
 *
 * Refuses, all together, what the stage finds: categories with one level, fewer cells than coefficients, dependent columns, questions about
 * what the model does not hold, a leverage of 1 under HC2 to HC4, clusters that cut a block, structures whose parameters the cells cannot tell
 * apart.
 */
export function checkModel({ plan, cells }: { readonly plan: Plan; readonly cells: Cells }): Outcome<Model> {
  const scaled = onOutcomeScale(cells);
  if (!scaled.ok) return scaled;
  const known = learnTerms({ terms: plan.terms, intercept: plan.intercept, cells });
  if (!known.ok) return known;
  const design = designOf(known.value, cells);
  if (!design.ok) return design;
  const cut = clustersThatCut(plan, cells);
  const problems: Problem[] = [
    ...checkQuestions({ plan, design: design.value, known: known.value }),
    ...checkLeverageOf({ plan, design: design.value, labels: cells.labels }),
    ...cut,
    ...(cut.length > 0 ? [] : checkClustersOf({ plan, design: design.value, cells })),
  ];
  const take = (rival: Rival, at: string): Judged | null => {
    const judged = judge(rival, { at, design: design.value, cells: scaled.value.cells });
    if (judged.ok) return judged.value;
    problems.push(...judged.problems);
    return null;
  };
  const chosen = take(plan.variance, '/variance');
  const target = typeof plan.target === 'string' ? null : take(plan.target, '/target');
  const rivals = plan.beside.flatMap((rival, i) => take(rival, `/beside/${i}`) ?? []);
  if (problems.length > 0 || !chosen) return refuseAll(problems);
  return done({
    ...scaled.value,
    known: known.value,
    design: design.value,
    chosen: chosen.structure,
    target: target?.structure ?? null,
    rivals: rivals.map(({ structure }) => structure),
    hardlySeparate: chosen.hardlySeparate,
  });
}

interface Judged {
  readonly structure: Structure;
  readonly hardlySeparate: Identification['hardlySeparate'];
}

function judge(
  rival: Rival,
  { at, design, cells }: { readonly at: string; readonly design: Design; readonly cells: Cells },
): Outcome<Judged> {
  const structure = structureOf({ variance: rival, cells, at });
  if (!structure.ok) return structure;
  const identified = identificationOf({ design, structure: structure.value, at });
  if (!identified.ok) return identified;
  return done({ structure: structure.value, hardlySeparate: identified.value.hardlySeparate });
}
