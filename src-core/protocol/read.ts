import type * as v from 'valibot';
import { checkMethod, type Sections } from './check-method';
import { checkData, checkRoles } from './check-roles';
import { checkTabulation } from './check-tabulation';
import { checkQuestions, checkTerms } from './check-terms';
import { checkAlternative, checkCounts, checkVariance } from './check-variance';
import { faultsIn } from './faults';
import { filledBy } from './filled';
import { readJson } from './json';
import { done, type Outcome, problem, refuseAll } from './outcome';
import type { Plan } from './plan';
import { defaultAddedHalf, defaultEstimate, withCorrection } from './plan-defaults';
import { type FilledPlan, planSchema } from './plan-schema';
import { below, inDocumentOrder, isWithin } from './pointer';
import type { Problem } from './problems';
import { isAbsent, jsonTypeOf, own } from './schema-nodes';
import type { Tabulation } from './tabulation';
import { tabulationSchema } from './tabulation-schema';

/**
 * Reads the text of a plan into its normal form: every default filled in, keys in the contract's order.
 *
 * Refuses with every problem of the stage "form", in document order: what needs no data. A text that is no JSON, or of another format, is
 * refused with that alone.
 *
 * Example: `readPlan('{"format":"steelyard-plan/1"}')` lacks data, roles and variance.
 */
export function readPlan(text: string): Outcome<Plan> {
  const read = readJson(text);
  return read.ok ? normalPlan(read.value) : read;
}

/** Reads the text of a tabulation into its normal form; refuses as `readPlan` does. */
export function readTabulation(text: string): Outcome<Tabulation> {
  const read = readJson(text);
  return read.ok ? normalTabulation(read.value) : read;
}

/** The normal form of a plan that is JSON already. Normalising a normal form gives an equal one. */
export function normalPlan(value: unknown): Outcome<Plan> {
  const alien = checkFormat(value, 'steelyard-plan/1');
  if (alien.length > 0) return refuseAll(alien);
  const faults = faultsIn(planSchema, value);
  const sections = planSections(value as object, faults);
  const problems = [...faults, ...checkPlan(sections)];
  return problems.length > 0 ? refuseAll(inOrder(problems, value)) : done(planOf(sections));
}

/** The normal form of a tabulation that is JSON already. */
export function normalTabulation(value: unknown): Outcome<Tabulation> {
  const alien = checkFormat(value, 'steelyard-tabulation/1');
  if (alien.length > 0) return refuseAll(alien);
  const faults = faultsIn(tabulationSchema, value);
  const sections = sectionsOf(tabulationSchema, value as object, faults);
  const problems = [...faults, ...checkTabulation(sections)];
  // Without a problem every section is whole.
  return problems.length > 0 ? refuseAll(inOrder(problems, value)) : done(sections as Tabulation);
}

/** Another format is another document: nothing else is said about it. */
export function checkFormat(value: unknown, expected: string): Problem[] {
  if (jsonTypeOf(value) !== 'object')
    return [problem('wrong-type', { found: jsonTypeOf(value), expected: 'object' }, '')];
  const found = own(value as object, 'format');
  if (isAbsent(found) || found === expected) return [];
  if (typeof found === 'object')
    return [problem('wrong-type', { found: jsonTypeOf(found), expected: 'string' }, '/format')];
  return [problem('wrong-format', { found, expected }, '/format')];
}

/** Stable: problems of one place keep the order in which they were found. */
function inOrder(problems: readonly Problem[], document: unknown): Problem[] {
  const compare = inDocumentOrder(document);
  return [...problems].sort((one, other) => compare(one.at ?? '', other.at ?? ''));
}

/** Each section filled in, or null where it has a fault or is required and absent. */
function sectionsOf<E extends Record<string, v.GenericSchema>>(
  schema: { readonly entries: E },
  value: object,
  faults: readonly Problem[],
): { [K in keyof E]: v.InferOutput<E[K]> | null } {
  const lacking = faults.flatMap((fault) => (fault.at === '' && 'key' in fault.facts ? [fault.facts.key] : []));
  const filled = Object.entries(schema.entries).map(([key, entry]) => {
    const faulty = lacking.includes(key) || faults.some(({ at }) => isWithin(at ?? '', below('', key)));
    return [key, faulty ? null : filledBy(entry, own(value, key))];
  });
  return Object.fromEntries(filled) as { [K in keyof E]: v.InferOutput<E[K]> | null };
}

function planSections(value: object, faults: readonly Problem[]): Sections {
  const filled: { [K in keyof FilledPlan]: FilledPlan[K] | null } = sectionsOf(planSchema, value, faults);
  const { variance, outcomeScale, inference } = filled;
  const unstated = filled.estimate === null && !faults.some(({ at }) => isWithin(at ?? '', '/estimate'));
  const estimate =
    unstated && variance !== null && outcomeScale !== null ? defaultEstimate(variance, outcomeScale) : filled.estimate;
  return { ...filled, estimate, inference: inference === null ? null : withCorrection(inference) };
}

function checkPlan(plan: Sections): Problem[] {
  const { roles, variance, terms, questions } = plan;
  // What rests on a structure is not judged where its parts cannot stand together.
  const countable = variance !== null && checkCounts(variance.parts, '/variance').length === 0;
  return [
    ...(plan.data === null ? [] : checkData(plan.data, roles)),
    ...(roles === null ? [] : checkRoles(roles)),
    ...(terms === null || plan.intercept === null ? [] : checkTerms(terms, plan.intercept)),
    ...(variance === null ? [] : checkVariance(variance, roles, '/variance')),
    ...(plan.target === null ? [] : checkAlternative(plan.target, roles, '/target')),
    ...(plan.beside ?? []).flatMap((rival, i) => checkAlternative(rival, roles, below('/beside', i))),
    ...checkMethod(countable ? plan : { ...plan, variance: null }),
    ...(questions === null || terms === null ? [] : checkQuestions(questions, terms)),
  ];
}

/** Without a problem every section is whole; what is left open is the added half, which rests on the estimate. */
function planOf(sections: Sections): Plan {
  const plan = sections as Plan;
  return { ...plan, addedHalf: plan.addedHalf ?? defaultAddedHalf(plan.outcomeScale, plan.estimate) };
}
