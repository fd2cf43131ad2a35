import { fitStructure } from '@core/estimate/fit';
import { inferenceOf } from '@core/inference/inferred';
import type { Design } from '@core/model/design';
import { designOf } from '@core/model/design';
import { learnTerms } from '@core/model/learn-terms';
import type { Structure } from '@core/model/structure';
import { structureOf } from '@core/model/structure-of';
import { fromDoubles } from '@core/numbers/decimals';
import { seeded } from '@core/numbers/random';
import type { Outcome } from '@core/protocol/outcome';
import type { Cells } from '@core/table/cells';
import type { Ground, Scenario } from './scenarios';
import { cellsOfTable } from './table';

const level = 0.05;

/** Share of draws whose interval (or test at 5 %, where there is none) holds the true value. */
export interface Coverage {
  readonly x: number;
  readonly z: number;
  /** Of the joint question whether both are 0, which they are. */
  readonly joint: number;
  readonly draws: number;
  /** Draws without an answer: no maximum, no error. */
  readonly undefined: number;
}

/** The covariates of G cells: x normal, z of a third of the groups, sizes from 5 to 300, groups of two to six cells. */
export function groundOf(cells: number, seed: number): Ground {
  const random = seeded(seed);
  const group: string[] = [];
  for (let own = 0; group.length < cells; own++) {
    const size = Math.min(2 + random.below(5), cells - group.length);
    for (let i = 0; i < size; i++) group.push(`g${own}`);
  }
  const ways = Math.ceil(Math.sqrt(cells));
  const treated = new Map([...new Set(group)].map((one, b) => [one, b % 3 === 0 ? 1 : 0]));
  return {
    x: Float64Array.from({ length: cells }, () => random.normal()),
    z: Float64Array.from(group, (one) => treated.get(one) as number),
    n: Float64Array.from({ length: cells }, () => Math.round(5 + 295 * random.uniform() * random.uniform())),
    s: Float64Array.from({ length: cells }, () => 0.4 + 1.6 * random.uniform()),
    group,
    also: Array.from({ length: cells }, (_, g) => `h${g % ways}`),
  };
}

/** Draws a scenario's errors again and again, and counts how often its intervals hold what is true: 1 for the intercept, 0 for x and z. */
export function coverageOf(scenario: Scenario, asked: { cells: number; draws: number; seed: number }): Coverage {
  const ground = groundOf(asked.cells, asked.seed);
  const random = seeded(asked.seed + 1);
  let fixed: Prepared | null = null;
  const held = { x: 0, z: 0, joint: 0, answered: 0 };
  for (let draw = 0; draw < asked.draws; draw++) {
    const { errors, s } = scenario.draw(ground, random);
    if (!fixed || s) fixed = prepared(scenario, s ? { ...ground, s } : ground);
    const answer = answerTo(scenario, fixed, fromDoubles(errors.map((e) => 1 + e)));
    if (!answer) continue;
    held.answered++;
    if (answer.x) held.x++;
    if (answer.z) held.z++;
    if (answer.joint) held.joint++;
  }
  const share = (count: number) => count / held.answered;
  return {
    x: share(held.x),
    z: share(held.z),
    joint: share(held.joint),
    draws: asked.draws,
    undefined: asked.draws - held.answered,
  };
}

interface Prepared {
  readonly cells: Cells;
  readonly design: Design;
  readonly structure: Structure;
}

export function must<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

export function prepared({ plan }: Pick<Scenario, 'plan'>, ground: Ground): Prepared {
  const cells = cellsOfTable({ ...ground }, plan);
  const known = must(learnTerms({ terms: plan.terms, intercept: true, cells }));
  return {
    cells,
    design: must(designOf(known, cells)),
    structure: must(structureOf({ variance: plan.variance, cells })),
  };
}

function answerTo(
  { plan }: Scenario,
  { cells, design, structure }: Prepared,
  response: ReturnType<typeof fromDoubles>,
): { readonly x: boolean; readonly z: boolean; readonly joint: boolean } | null {
  const fitted = fitStructure({ response, design, structure, estimate: plan.estimate });
  if (!fitted.ok) return null;
  const inferred = inferenceOf({ fitted: fitted.value, cells, plan });
  if (!inferred.ok) return null;
  const [, x, z] = inferred.value.coefficients;
  const joint = inferred.value.jointOf([1, 2]).p;
  if (!x || !z || x.p === null || z.p === null) return null;
  return { x: x.p >= level, z: z.p >= level, joint: joint === null || joint >= level };
}
