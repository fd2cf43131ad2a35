import * as v from 'valibot';
import type { About, DataPlan, Derive, Estimate, Plan, Question, ReportPlan, Roles, Tests } from './plan';
import { disclosureSchema, limitSchema, readSchema, ruleSchema, titleSchema } from './read-schema';
import {
  level,
  mustBeStated,
  name,
  names,
  notNegative,
  oneOf,
  orNull,
  positive,
  shaped,
  text,
  textOrNumber,
  whole,
} from './shapes';
import { rivalSchema, targetSchema, termSchema, varianceSchema } from './variance-schema';

// Entries stand in the contract's order: the normal form takes it over.

const about = shaped<About>()(
  v.strictObject({ question: orNull(text), source: orNull(text), extracted: orNull(text), analyst: orNull(text) }),
);

const derive = shaped<Derive>()(
  v.variant('as', [
    v.strictObject({
      name,
      as: v.picklist(['lag', 'change']),
      of: name,
      by: v.array(name),
      order: name,
      steps: v.nullish(whole(1), 1),
    }),
    v.strictObject({ name, as: v.literal('ratio'), of: name, over: name }),
    v.strictObject({ name, as: v.literal('difference'), of: name, minus: name }),
    v.strictObject({ name, as: v.literal('centred'), of: name }),
    v.strictObject({ name, as: v.picklist(['group-mean', 'within-group-deviation']), of: name, by: names }),
  ]),
);

const on = v.pipe(v.record(v.string(), name), v.minEntries(1));

const data = shaped<DataPlan>()(
  v.strictObject({
    file: name,
    read: readSchema,
    join: v.nullish(v.array(v.strictObject({ file: name, on, read: readSchema })), []),
    derive: v.nullish(v.array(derive), []),
    omit: v.nullish(v.array(ruleSchema), []),
    limits: v.nullish(v.record(v.string(), limitSchema), {}),
    sizeWithin: orNull(notNegative),
  }),
);

const roles = shaped<Roles>()(
  v.strictObject({
    label: orNull(names),
    outcome: orNull(name),
    outcomeUnit: v.nullish(v.picklist(['number', 'share', 'percent']), 'number'),
    size: orNull(name),
    error: orNull(name),
    errorKind: v.nullish(v.picklist(['se', 'variance', 'half-width', 'cv']), 'se'),
    errorLevel: orNull(level),
    count: orNull(name),
    exposure: orNull(name),
    per: v.nullish(positive, 1),
    designEffect: orNull(name),
    withinSd: orNull(name),
  }),
);

const rule = mustBeStated(v.picklist(['dersimonian-laird', 'paule-mandel', 'hanushek']));

export const estimateSchema = shaped<Estimate>()(
  v.variant('method', [
    v.strictObject({ method: v.picklist(['least-squares', 'two-step', 'full', 'restricted']) }),
    v.strictObject({ method: v.literal('moments'), rule }),
  ]),
);

const levelOrDefault = v.nullish(level, 0.95);

/** As written: a correction left out is filled in afterwards, since it depends on `alsoBy`. */
export const inferenceSchema = v.variant('kind', [
  v.strictObject({ kind: v.literal('model'), level: levelOrDefault }),
  v.strictObject({ kind: v.literal('knapp-hartung'), level: levelOrDefault, floor: v.nullish(v.boolean(), false) }),
  v.strictObject({ kind: v.literal('kenward-roger'), level: levelOrDefault }),
  v.strictObject({
    kind: v.literal('robust'),
    level: levelOrDefault,
    correction: v.nullish(v.picklist(['HC0', 'HC1', 'HC2', 'HC3', 'HC4']), 'HC3'),
  }),
  v.strictObject({
    kind: v.literal('clustered'),
    level: levelOrDefault,
    correction: orNull(v.picklist(['CR0', 'CR1', 'CR2', 'CR3'])),
    by: names,
    alsoBy: orNull(names),
  }),
  v.strictObject({
    kind: v.literal('wild'),
    level: levelOrDefault,
    by: names,
    replications: v.nullish(whole(1), 9999),
    seed: v.nullish(whole(0, Number.MAX_SAFE_INTEGER), 1),
  }),
]);

const where = v.record(v.string(), textOrNumber);
const share = v.pipe(v.number(), v.minValue(0), v.maxValue(1));
const shares = v.pipe(v.array(v.strictObject({ where, share })), v.nonEmpty());
const asked = { name: orNull(name), family: orNull(name) };

export const questionSchema = shaped<Question>()(
  v.variant('kind', [
    v.strictObject({ kind: v.literal('joint'), terms: names, ...asked }),
    v.strictObject({
      kind: v.literal('combination'),
      of: v.pipe(v.record(v.string(), v.number()), v.minEntries(1)),
      equals: v.nullish(v.number(), 0),
      ...asked,
    }),
    v.strictObject({ kind: v.literal('expect'), where, size: orNull(positive), error: orNull(positive), ...asked }),
    v.strictObject({ kind: v.literal('average'), of: shares, minus: orNull(shares), ...asked }),
  ]),
);

const tests = shaped<Tests>()(
  v.strictObject({ columns: orNull(names), whiteColumns: orNull(names), neighbours: orNull(name) }),
);

/** The keys of the result whose section the report can leave out. */
const sections = oneOf([
  'plan',
  'data',
  'fit',
  'robustBeside',
  'individualLevel',
  'cells',
  'effectiveCells',
  'beside',
  'square',
  'breakEven',
  'intraclass',
  'evidence',
  'betweenRules',
  'questions',
  'beam',
  'exponentScan',
  'exponentSupport',
  'bounds',
  'commonCorrelation',
  'whatItTakes',
  'bootstrapTau2',
  'overturn',
  'selfChecks',
  'cautions',
  'made',
]);

const report = shaped<ReportPlan>()(
  v.strictObject({
    paper: v.nullish(v.picklist(['A4', 'Letter']), 'A4'),
    omit: v.nullish(v.array(sections), []),
  }),
);

/** A plan before the defaults that depend on more than one of its keys. */
export type FilledPlan = Pick<Plan, Exclude<keyof Plan, 'estimate' | 'inference'>> & {
  estimate: Estimate | null;
  inference: v.InferOutput<typeof inferenceSchema>;
};

/** The plan as a person writes it; a normal form is one of these. */
export const planSchema = shaped<FilledPlan>()(
  v.strictObject({
    format: v.literal('steelyard-plan/1'),
    title: titleSchema,
    about: orNull(about),
    data,
    roles,
    units: v.nullish(v.record(v.string(), text), {}),
    matters: v.nullish(v.record(v.string(), positive), {}),
    outcomeScale: v.nullish(v.picklist(['identity', 'log', 'logit']), 'identity'),
    addedHalf: orNull(v.picklist(['no', 'extreme-cells', 'all-cells'])),
    terms: v.nullish(v.array(termSchema), []),
    intercept: v.nullish(v.boolean(), true),
    variance: varianceSchema,
    estimate: orNull(estimateSchema),
    target: v.nullish(targetSchema, 'structure'),
    inference: v.nullish(inferenceSchema, { kind: 'model' }),
    beside: v.nullish(v.array(rivalSchema), []),
    questions: v.nullish(v.array(questionSchema), []),
    tests: orNull(tests),
    disclosure: disclosureSchema,
    report: v.nullish(report, {}),
  }),
);
