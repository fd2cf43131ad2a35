import { fitStructure } from '@core/estimate/fit';
import { dumouchelDuncan } from '@core/evidence/added-columns';
import { boundaryLikelihoodRatios } from '@core/evidence/boundary';
import { brownForsythe } from '@core/evidence/brown-forsythe';
import { dependenceOf } from '@core/evidence/dependence';
import { type Frame, frameOf } from '@core/evidence/frame';
import { goldfeldQuandt } from '@core/evidence/goldfeld-quandt';
import { heterogeneity } from '@core/evidence/heterogeneity';
import { normalityOf } from '@core/evidence/normality';
import { breuschPagan, koenker, sizeScore, sizeScoreStudentised, white } from '@core/evidence/score-test';
import { sizeSlope } from '@core/evidence/size-slope';
import { fromDoubles } from '@core/numbers/decimals';
import { type Random, seeded } from '@core/numbers/random';
import type { Plan } from '@core/protocol/plan';
import type { Evidence } from '@core/protocol/result';
import { groundOf, must, prepared } from './coverage';
import type { Ground } from './scenarios';
import { planOn } from './table';

const stop = () => true;
const model = { kind: 'model', level: 0.95 } as const;
const perSize: Plan['variance']['parts'] = [{ kind: 'per-size', correlation: null }];
const given: Plan['variance']['parts'] = [{ kind: 'given', scale: 'fixed', freedom: null, correlation: null }];

interface Sized {
  readonly name: string;
  readonly of: (frame: Frame) => Evidence;
}

interface Setting {
  readonly plan: Plan;
  readonly draw: (ground: Ground, random: Random) => Float64Array;
  readonly tests: readonly Sized[];
}

const evidence = (one: Evidence | { readonly evidence: Evidence }): Evidence =>
  'evidence' in one ? one.evidence : one;
const first = (some: readonly Evidence[]): Evidence => some[0] as Evidence;

const settings: readonly Setting[] = [
  {
    plan: planOn({ parts: perSize, estimate: { method: 'least-squares' }, inference: model, label: ['group'] }),
    draw: ({ n }, random) => n.map((m) => (6 * random.normal()) / Math.sqrt(m)),
    tests: [
      { name: 'Breusch-Pagan', of: (frame) => evidence(breuschPagan(frame)) },
      { name: 'Koenker', of: (frame) => evidence(koenker(frame)) },
      { name: 'score on size', of: (frame) => evidence(sizeScore(frame)) },
      { name: 'score on size, studentised', of: (frame) => evidence(sizeScoreStudentised(frame)) },
      { name: 'size slope', of: (frame) => evidence(sizeSlope(frame)) },
      { name: 'White', of: (frame) => evidence(white(frame)) },
      { name: 'Goldfeld-Quandt by size', of: (frame) => evidence(goldfeldQuandt(frame)) },
      { name: 'Brown-Forsythe by quarter of size', of: (frame) => evidence(brownForsythe(frame)) },
      { name: 'DuMouchel-Duncan', of: (frame) => dumouchelDuncan(frame) },
      { name: 'dependence by group', of: (frame) => first(dependenceOf(frame, stop)) },
      { name: 'Shapiro-Wilk', of: (frame) => normalityOf(frame) },
    ],
  },
  {
    plan: planOn({
      parts: [...perSize, { kind: 'between', correlation: null }],
      estimate: { method: 'restricted' },
      inference: model,
    }),
    draw: ({ n }, random) => n.map((m) => (6 * random.normal()) / Math.sqrt(m)),
    tests: [
      { name: 'τ² = 0, restricted likelihood ratio', of: (frame) => first(boundaryLikelihoodRatios(frame, stop)) },
    ],
  },
  {
    plan: planOn({ parts: given, estimate: { method: 'least-squares' }, inference: model }),
    draw: ({ s }, random) => s.map((sd) => sd * random.normal()),
    tests: [{ name: 'heterogeneity beyond given errors', of: (frame) => heterogeneity(frame, stop) }],
  },
];

/** One line a test: how often it rejects at 5 % where its structure holds, for each number of cells. */
export function sizesOfTests(asked: {
  readonly sizes: readonly { readonly cells: number; readonly draws: number }[];
  readonly seed: number;
}): string[] {
  const head = `${''.padEnd(48)}${asked.sizes.map(({ cells }) => `G = ${cells}`.padEnd(12)).join('')}`;
  const lines = settings.flatMap((setting) => {
    const figures = asked.sizes.map(({ cells, draws }) =>
      rejections(setting, { cells, draws, seed: asked.seed + cells }),
    );
    return setting.tests.map(
      ({ name }, i) =>
        `${name.padEnd(48)}${figures.map((own) => (100 * (own[i] as number)).toFixed(1).padEnd(12)).join('')}`,
    );
  });
  return [head, ...lines];
}

/** Share of rejections of each test. */
export function rejections(
  { plan, draw, tests }: Setting,
  asked: { readonly cells: number; readonly draws: number; readonly seed: number },
): number[] {
  const ground = groundOf(asked.cells, asked.seed);
  const random = seeded(asked.seed + 2);
  const { cells, design, structure } = prepared({ plan }, ground);
  const counts = tests.map(() => 0);
  for (let i = 0; i < asked.draws; i++) {
    const response = fromDoubles(draw(ground, random).map((e) => 1 + e));
    const fitted = must(fitStructure({ response, design, structure, estimate: plan.estimate }));
    const frame = frameOf({ fitted, cells, plan, design });
    for (const [t, { of }] of tests.entries()) {
      const { p } = of(frame);
      if (p !== null && p < 0.05) counts[t] = (counts[t] as number) + 1;
    }
  }
  return counts.map((count) => count / asked.draws);
}
