import { Buffer } from 'node:buffer';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import { normalPlan } from '@core/protocol/read';
import type { SourceTable } from '@core/protocol/source';
import { assemble } from '@core/table/assemble';
import type { Cells } from '@core/table/cells';
import { filesOf } from '@core/table/plan-files';
import { prepareCells } from '@core/table/prepare-cells';
import { readSource } from '@main/intake/read-source';

/** A written plan, given as what differs from the smallest one. */
export function planWith(parts: object): Plan {
  const written = {
    format: 'steelyard-plan/1',
    data: { file: 'cells.csv' },
    roles: { outcome: 'y', size: 'n' },
    variance: { parts: [{ kind: 'per-size' }] },
    ...parts,
  };
  const plan = normalPlan(written);
  if (!plan.ok) throw new Error(JSON.stringify(plan.problems));
  return plan.value;
}

/** Tables as intake hands them over, from texts by file name. */
export function sourcesOf(plan: Plan, files: Readonly<Record<string, string>>): Map<string, Outcome<SourceTable>> {
  return new Map(
    filesOf(plan).flatMap(({ key, file, at, read }) => {
      const text = files[file];
      return text === undefined ? [] : [[key, readSource({ file, bytes: Buffer.from(text), read, at })] as const];
    }),
  );
}

export function prepare(parts: object, files: Readonly<Record<string, string>> | string): Outcome<Cells> {
  const plan = planWith(parts);
  return prepareCells({ plan, sources: sourcesOf(plan, typeof files === 'string' ? { 'cells.csv': files } : files) });
}

export function cells(parts: object, files: Readonly<Record<string, string>> | string): Cells {
  const outcome = prepare(parts, files);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

/** Problems of a refusal; none where there is no refusal. */
export function problems(parts: object, files: Readonly<Record<string, string>> | string): readonly object[] {
  const outcome = prepare(parts, files);
  return outcome.ok ? [] : outcome.problems;
}

/** All columns over all rows, before anything is left out. */
export function columns(parts: object, files: Readonly<Record<string, string>> | string) {
  const plan = planWith(parts);
  const assembled = assemble({
    plan,
    sources: sourcesOf(plan, typeof files === 'string' ? { 'cells.csv': files } : files),
  });
  if (!assembled.ok) throw new Error(JSON.stringify(assembled.problems));
  return assembled.value.frame;
}
