import * as v from 'valibot';
import type { Inference, Plan } from './plan';
import { estimateSchema, inferenceSchema, planSchema, questionSchema } from './plan-schema';
import type {
  Answer,
  BesideResult,
  CellResult,
  Coefficient,
  DataUsed,
  DetailValue,
  Evidence,
  EvidenceTest,
  FitResult,
  IndividualLevel,
  QuestionResult,
  Result,
} from './result';
import { shaped } from './shapes';
import { rivalSchema } from './variance-schema';

const number = v.number();
const text = v.string();
const truth = v.boolean();
const maybe = v.nullable(v.number());
const numbers = v.array(number);

/** A normal form is a written plan with every default filled in; that nothing is left to fill is checked apart. */
const plan = planSchema as unknown as v.GenericSchema<Plan>;
const inference = inferenceSchema as unknown as v.GenericSchema<Inference>;

const data = shaped<DataUsed>()(
  v.strictObject({
    rows: number,
    used: number,
    omitted: v.array(
      v.strictObject({
        row: number,
        label: text,
        reason: v.strictObject({
          code: v.picklist([
            'omit-rule',
            'missing',
            'not-above-zero',
            'suppressed-confidential',
            'suppressed-unreliable',
            'suppressed-unknown',
            'not-collected',
            'not-applicable',
            'interval',
            'blank',
          ]),
          column: text,
          text,
        }),
      }),
    ),
    files: v.array(v.strictObject({ name: text, sha256: text })),
    unmatched: v.array(
      v.strictObject({ file: text, side: v.picklist(['ours', 'theirs']), key: v.record(v.string(), text) }),
    ),
  }),
);

const reference = v.nullable(v.strictObject({ kind: v.picklist(['t', 'normal']), freedom: maybe }));
const interval = v.strictObject({ estimate: number, low: maybe, high: maybe });

const coefficient = shaped<Coefficient>()(
  v.strictObject({
    ...{ term: text, estimate: number, low: maybe, high: maybe, se: maybe },
    ...{ reference, ratio: maybe, p: maybe },
  }),
);
const coefficients = v.array(coefficient);

const parameter = v.strictObject({
  ...{ name: text, estimate: maybe, se: maybe, low: maybe, high: maybe },
  ...{ atBoundary: truth, fixed: truth },
});

const carriedBy = v.strictObject({
  term: text,
  cells: number,
  by: v.array(v.strictObject({ column: text, groups: number, constantWithin: truth })),
});

const fitted = shaped<FitResult>()(
  v.strictObject({
    estimate: estimateSchema,
    inference,
    coefficients,
    covariance: v.array(v.array(maybe)),
    carriedBy: v.array(carriedBy),
    variance: v.array(parameter),
    residualSd: maybe,
    weightedRss: number,
    residualFreedom: number,
    logLikelihood: maybe,
    restrictedLogLikelihood: maybe,
    aic: maybe,
    aicc: maybe,
    bic: maybe,
    rSquared: v.strictObject({ weighted: maybe, adjusted: maybe, raw: maybe, centred: truth }),
    chiSquare: v.nullable(v.strictObject({ statistic: number, freedom: number, p: maybe })),
    deviance: maybe,
    knappHartungQ: maybe,
    tau2Bias: maybe,
    wild: v.nullable(v.array(v.strictObject({ term: text, count: number, p: number, floor: number }))),
    digits: number,
    condition: number,
    converged: truth,
    startsTried: number,
    errorFreedom: v.nullable(v.strictObject({ median: number, low: number, high: number })),
    samplingShare: maybe,
  }),
);

const individualLevel = shaped<IndividualLevel>()(
  v.strictObject({
    coefficients,
    ...{ persons: number, residualFreedom: number, residualSd: maybe, rSquared: maybe, withinSd: maybe },
    lackOfFit: v.nullable(v.strictObject({ statistic: number, freedom1: number, freedom2: number, p: number })),
  }),
);

const cell = shaped<CellResult>()(
  v.strictObject({
    ...{ label: text, size: maybe, effectiveSize: maybe, variance: number, observed: number, fitted: number },
    ...{ residual: number, whitened: number, leverage: number, studentised: maybe, studentisedWithout: maybe },
    ...{ cookDistance: maybe, fitShift: maybe, coefficientShifts: v.array(maybe), covarianceRatio: maybe },
    ...{ weight: number, weightShare: number, shrunken: maybe, ownShare: maybe, mse: maybe },
    mseParts: v.nullable(v.strictTuple([maybe, maybe, maybe])),
  }),
);

const price = v.strictObject({
  ...{ term: text, claimedSe: maybe, expectedClaimedSe: maybe },
  ...{ actualSe: maybe, cost: maybe, claimedOverActual: maybe },
});

const beside = shaped<BesideResult>()(
  v.strictObject({
    variance: rivalSchema,
    parameters: v.array(parameter),
    variances: numbers,
    logLikelihood: maybe,
    restrictedLogLikelihood: maybe,
    coefficients,
    price: v.array(price),
    actualCovariance: v.array(v.array(maybe)),
    eigenvalues: v.array(maybe),
    efficiency: maybe,
    moved: v.array(v.strictObject({ term: text, byCell: numbers })),
  }),
);

const detailValue: v.GenericSchema<DetailValue> = v.union([
  v.number(),
  v.string(),
  v.boolean(),
  v.null(),
  v.array(v.lazy(() => detailValue)),
  v.record(
    v.string(),
    v.lazy(() => detailValue),
  ),
]);
const detail = v.record(
  v.string(),
  v.lazy(() => detailValue),
);

const tests = [
  'breusch-pagan',
  'koenker',
  'size-score',
  'size-score-studentised',
  'size-slope',
  'white',
  'goldfeld-quandt',
  'brown-forsythe',
  'dumouchel-duncan',
  'dependence',
  'heterogeneity',
  'boundary-likelihood-ratio',
  'shapiro-wilk',
] as const satisfies readonly EvidenceTest[];

const evidence = shaped<Evidence>()(
  v.strictObject({
    test: v.picklist(tests),
    ...{ statistic: maybe, freedom1: maybe, freedom2: maybe, p: maybe },
    reading: v.picklist(['rejects', 'does-not-contradict', 'not-applicable']),
    smallestDeparture: v.nullable(
      v.strictObject({
        measure: v.picklist(['variance-ratio', 'common-correlation', 'tau2', 'omega2']),
        size: number,
        errors: v.array(v.strictObject({ term: text, se: number })),
      }),
    ),
    detail,
  }),
);

const estimated = v.strictObject({ estimate: number, low: maybe, high: maybe, se: maybe, reference });

const answer = shaped<Answer>()(
  v.union([
    v.strictObject({ statistic: maybe, scale: maybe, freedom1: number, freedom2: maybe, p: maybe }),
    v.strictObject({ ...estimated.entries, p: maybe }),
    v.strictObject({
      fitted: estimated,
      newCellTrue: v.nullable(estimated),
      newCellObserved: v.nullable(estimated),
    }),
  ]),
);

const question = shaped<QuestionResult>()(v.strictObject({ question: questionSchema, answer, pHolm: maybe }));

const rule = v.picklist(['dersimonian-laird', 'paule-mandel', 'hanushek', 'full', 'restricted']);
const betweenRule = v.strictObject({
  ...{ rule, tau2: maybe, profileLow: maybe, profileHigh: maybe, qLow: maybe, qHigh: maybe },
  coefficients,
});

const beam = v.strictObject({
  term: text,
  pulls: numbers,
  contributions: v.nullable(numbers),
  heaviest: v.strictObject({ cells: v.array(text), change: v.nullable(interval) }),
});

const exponentSupport = v.strictObject({
  ...{ best: number, low: number, high: number },
  edge: v.nullable(v.picklist(['low', 'high', 'both'])),
  ranges: v.array(v.strictObject({ term: text, low: number, high: number, excludesZero: truth })),
});

const bound = v.strictObject({
  ...{ term: text, low: maybe, high: maybe, weightsHeld: truth },
  refitted: v.nullable(v.strictObject({ low: maybe, high: maybe })),
  survives: v.strictObject({ sign: truth, significance: truth }),
  over: v.strictObject({ cells: number, brought: number, outside: number, vertices: number, all: truth }),
});

const need = { se: maybe, cells: maybe, persons: maybe };

const whatItTakes = v.strictObject({
  ...{ term: text, samplingShare: maybe, floor: maybe },
  halfWidth: v.nullable(v.strictObject(need)),
  matters: v.nullable(v.strictObject({ ...need, difference: number })),
});

const bootstrapBoundary = v.strictObject({
  zero: v.array(text),
  likelihood: v.picklist(['full', 'restricted']),
  ...{ statistic: number, replications: number, seed: number, count: number, p: number, floor: number },
});

const overturn = v.strictObject({
  term: text,
  change: v.strictObject({ kind: v.picklist(['rival', 'cell', 'block', 'exponent', 'bound', 'robust']), what: text }),
  ...{ estimate: number, low: maybe, high: maybe },
  crosses: v.nullable(v.picklist(['zero', 'matters'])),
});

const caution = v.strictObject({
  code: text,
  group: v.picklist(['changes-answer', 'limits-claim', 'for-record']),
  facts: detail,
});

const scanPoint = v.strictObject({
  delta: number,
  coefficients,
  logLikelihood: number,
  restrictedLogLikelihood: number,
});

/** One result, whole. */
export const resultSchema = shaped<Result>()(
  v.strictObject({
    format: v.literal('steelyard-result/1'),
    plan,
    data,
    fit: fitted,
    robustBeside: v.nullable(v.array(v.strictObject({ term: text, se: maybe, ratioToModel: maybe }))),
    individualLevel: v.nullable(individualLevel),
    cells: v.array(cell),
    effectiveCells: maybe,
    beside: v.array(beside),
    square: v.array(v.strictObject({ truth: number, weighting: number, term: text, se: maybe })),
    breakEven: v.array(v.strictObject({ term: text, intraclass: maybe })),
    intraclass: v.nullable(interval),
    evidence: v.array(evidence),
    betweenRules: v.array(betweenRule),
    questions: v.array(question),
    beam: v.array(beam),
    exponentScan: v.array(scanPoint),
    exponentSupport: v.nullable(exponentSupport),
    bounds: v.array(bound),
    commonCorrelation: v.array(v.strictObject({ rho: number, term: text, se: number })),
    whatItTakes: v.nullable(v.array(whatItTakes)),
    bootstrapTau2: v.nullable(v.array(bootstrapBoundary)),
    overturn: v.array(overturn),
    selfChecks: v.array(v.strictObject({ check: text, passed: truth, figure: maybe })),
    cautions: v.array(caution),
    made: v.strictObject({ version: text }),
  }),
);

/** Schemas that stand in several places, under the names by which a JSON Schema refers to them. */
export const sharedByResult = { detailValue, coefficient, parameter };
