import type { DraftPlan } from './draft';
import { type AlsoChanged, type Edited, sameEstimate, suits } from './edit-structure';
import { methodsFor } from './offered-parts';
import type { DataPlan, Derive, Join, Limit, Omit, OutcomeScale, Plan, Read, Status } from './plan';
import { defaultAddedHalf, defaultEstimate } from './plan-defaults';
import { stepsOf } from './pointer';

type AnyPlan = Plan | DraftPlan;

/** Where a file's way of being read stands in a plan: the data's own, or that of a joined file. */
export type FilePlace = { readonly kind: 'data' } | { readonly kind: 'join'; readonly at: number };

/** The files of a plan that are read as tables of columns, each with its place. */
export function filePlaces({
  data,
}: AnyPlan): readonly { readonly file: string; readonly read: Read; readonly place: FilePlace }[] {
  return [
    { file: data.file, read: data.read, place: { kind: 'data' } as const },
    ...data.join.map(({ file, read }, at) => ({ file, read, place: { kind: 'join', at } as const })),
  ];
}

/** Pointer to how a file is read. */
export function pointerOf(place: FilePlace): string {
  return place.kind === 'data' ? '/data/read' : `/data/join/${place.at}/read`;
}

/** The place of the file that a pointer into the data leads to. */
export function placeOf(at: string | null, { data }: AnyPlan): FilePlace {
  const [section, key, index] = stepsOf(at ?? '');
  const join = Number(index);
  return section === 'data' && key === 'join' && join < data.join.length
    ? { kind: 'join', at: join }
    : { kind: 'data' };
}

function withData<P extends AnyPlan>(plan: P, data: Partial<DataPlan>): P {
  return { ...plan, data: { ...plan.data, ...data } };
}

/** A plan with one of its files read otherwise. */
export function withRead<P extends AnyPlan>(plan: P, place: FilePlace, change: Partial<Read>): P {
  if (place.kind === 'data') return withData(plan, { read: { ...plan.data.read, ...change } });
  const join = plan.data.join.map((one, i) => (i === place.at ? { ...one, read: { ...one.read, ...change } } : one));
  return withData(plan, { join });
}

function readOf({ data }: AnyPlan, place: FilePlace): Read {
  const read = place.kind === 'data' ? data.read : data.join[place.at]?.read;
  if (read === undefined) throw new RangeError('no such file of the plan');
  return read;
}

/** What a token means: a status everywhere in the file, or a missing code of one column; null: nothing. It can mean one thing only. */
export type Meaning = { readonly status: Status } | { readonly missingIn: string } | null;

/** A plan with a token of one file declared to mean something. */
export function withToken<P extends AnyPlan>(plan: P, place: FilePlace, token: string, meaning: Meaning): P {
  const read = readOf(plan, place);
  const isMissing = meaning !== null && 'missingIn' in meaning;
  const statuses = Object.entries(read.statuses).filter(([own]) => own !== token);
  if (meaning !== null && 'status' in meaning) statuses.push([token, meaning.status]);
  // As a missing code it may stand for several columns at once.
  const missing = new Map(
    Object.entries(read.missing).map(([column, codes]) => [
      column,
      isMissing ? codes : codes.filter((c) => c !== token),
    ]),
  );
  if (isMissing) missing.set(meaning.missingIn, [...new Set([...(missing.get(meaning.missingIn) ?? []), token])]);
  const kept = [...missing].filter(([, codes]) => codes.length > 0);
  return withRead(plan, place, { statuses: Object.fromEntries(statuses), missing: Object.fromEntries(kept) });
}

/** What a token of a file is declared to mean. */
export function meaningOf(plan: AnyPlan, place: FilePlace, token: string): Meaning {
  const { statuses, missing } = readOf(plan, place);
  const status = Object.hasOwn(statuses, token) ? statuses[token] : undefined;
  if (status !== undefined) return { status };
  const column = Object.entries(missing).find(([, codes]) => codes.includes(token))?.[0];
  return column === undefined ? null : { missingIn: column };
}

/** A plan with marks of one file split off its numbers. */
export function withFootnote<P extends AnyPlan>(plan: P, place: FilePlace, mark: string): P {
  const { footnotes } = readOf(plan, place);
  return withRead(plan, place, { footnotes: [...new Set([...footnotes, mark])] });
}

export function withJoin<P extends AnyPlan>(plan: P, join: Join): P {
  return withData(plan, { join: [...plan.data.join, join] });
}

export function withDerived<P extends AnyPlan>(plan: P, derived: Derive): P {
  return withData(plan, { derive: [...plan.data.derive, derived] });
}

export function withOmission<P extends AnyPlan>(plan: P, omission: Omit): P {
  return withData(plan, { omit: [...plan.data.omit, omission] });
}

/** A plan without one of its joins, derived columns or rules. */
export function withoutStep<P extends AnyPlan>(plan: P, list: 'join' | 'derive' | 'omit', at: number): P {
  return withData(plan, { [list]: plan.data[list].filter((_, i) => i !== at) });
}

/** A plan with what is known of a column's rounded or suppressed values; null: they are taken as they stand. */
export function withLimit<P extends AnyPlan>(plan: P, column: string, limit: Limit | null): P {
  const { [column]: _old, ...limits } = plan.data.limits;
  return withData(plan, { limits: limit === null ? limits : { ...limits, [column]: limit } });
}

/**
 * A plan with its outcome on another scale.
 *
 * A method that was the structure's own on the old scale, or that the new one does not offer, gives way to its own on the new; an inference that the
 * method does not carry goes back to the model's; what is added to extreme shares belongs to the logit, and is settled anew. All of it waits where
 * no structure is stated yet.
 */
export function withScale<P extends AnyPlan>(plan: P, outcomeScale: OutcomeScale): P {
  const { variance, estimate, inference, target } = plan;
  if (variance === null || estimate === null) return { ...plan, outcomeScale, addedHalf: null };
  const own = sameEstimate(estimate, defaultEstimate(variance, plan.outcomeScale));
  const kept = !own && methodsFor({ variance, outcomeScale }).includes(estimate.method);
  const method = kept ? estimate : defaultEstimate(variance, outcomeScale);
  return {
    ...plan,
    outcomeScale,
    estimate: method,
    addedHalf: defaultAddedHalf(outcomeScale, method),
    inference: suits(inference, { variance, estimate: method, target })
      ? inference
      : { kind: 'model', level: inference.level },
  };
}

/** A whole plan with its outcome on another scale, and what changed with it. */
export function stateScale(before: Plan, outcomeScale: OutcomeScale): Edited {
  const plan = withScale(before, outcomeScale);
  const also: AlsoChanged[] = [
    ...(sameEstimate(plan.estimate, before.estimate) ? [] : (['estimate'] as const)),
    ...(plan.inference.kind === before.inference.kind ? [] : (['inference'] as const)),
  ];
  return { plan, also };
}

/** A plan with a unit stated for a column, or taken back where the text is empty. */
export function withUnit<P extends AnyPlan>(plan: P, column: string, unit: string): P {
  const { [column]: _old, ...units } = plan.units;
  return { ...plan, units: unit.trim() === '' ? units : { ...units, [column]: unit.trim() } };
}
