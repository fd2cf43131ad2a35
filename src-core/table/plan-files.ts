import { unsaidRead } from '../protocol/draft';
import type { Part, Plan, Read, Variance } from '../protocol/plan';
import { below } from '../protocol/pointer';

/** A file that a plan names. */
export interface PlanFile {
  /** Under which its table is handed on: the name, made distinct where one file is read in two ways. */
  readonly key: string;
  readonly file: string;
  /** Pointer to the first place that names it. */
  readonly at: string;
  readonly read: Read;
}

/**
 * The files that a plan names, each once for each way of reading it, in the order of the plan: its own, joined ones, matrices, the neighbour list.
 *
 * A matrix and a neighbour list have no `read`: everything about them is found from their bytes.
 */
export function filesOf(plan: Plan): readonly PlanFile[] {
  const named: Omit<PlanFile, 'key'>[] = [
    { file: plan.data.file, at: '/data/file', read: plan.data.read },
    ...plan.data.join.map(({ file, read }, i) => ({ file, at: `/data/join/${i}/file`, read })),
    ...matricesOf(plan).map(({ part, at }) => ({ file: part.file, at: `${at}/file`, read: unsaidRead })),
  ];
  const neighbours = plan.tests?.neighbours ?? null;
  if (neighbours !== null) named.push({ file: neighbours, at: '/tests/neighbours', read: unsaidRead });
  const seen = new Map<string, PlanFile>();
  const files = new Map<string, number>();
  for (const one of named) {
    const way = JSON.stringify([one.file, one.read]);
    if (seen.has(way)) continue;
    const before = files.get(one.file) ?? 0;
    files.set(one.file, before + 1);
    seen.set(way, { ...one, key: before === 0 ? one.file : `${one.file} (read ${before + 1})` });
  }
  return [...seen.values()];
}

/** The key under which the table of one place stands. */
export function keyOf(plan: Plan, file: string, read: Read = unsaidRead): string {
  const way = JSON.stringify([file, read]);
  return filesOf(plan).find((one) => JSON.stringify([one.file, one.read]) === way)?.key ?? file;
}

/** Every structure that a plan states: its own, a target's, its rivals', with pointers. */
export function structuresOf(plan: Plan): readonly { readonly variance: Variance; readonly at: string }[] {
  const rivals = plan.beside.map((rival, i) => ({ variance: rival, at: `/beside/${i}` }));
  const stated = [{ variance: plan.variance, at: '/variance' }, { variance: plan.target, at: '/target' }, ...rivals];
  return stated.flatMap(({ variance, at }) => (typeof variance === 'string' ? [] : [{ variance, at }]));
}

/** Every part of every structure, with pointers. */
export function partsOf(plan: Plan): readonly { readonly part: Part; readonly at: string }[] {
  return structuresOf(plan).flatMap(({ variance, at }) =>
    variance.parts.map((part, i) => ({ part, at: below(at, 'parts', i) })),
  );
}

export type MatrixPart = Extract<Part, { kind: 'matrix' }>;

export function matricesOf(plan: Plan): readonly { readonly part: MatrixPart; readonly at: string }[] {
  return partsOf(plan).flatMap(({ part, at }) => (part.kind === 'matrix' ? [{ part, at }] : []));
}
