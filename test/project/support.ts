import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { readPlan } from '@core/index';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan, Variance } from '@core/protocol/plan';
import { createProject, type Opening, type Project } from '@main/project/project';
import Database from 'better-sqlite3';
import { onTestFinished } from 'vitest';

/** A folder that is gone when the test is over. */
export function folder(): string {
  const path = mkdtempSync(join(tmpdir(), 'steelyard-project-'));
  onTestFinished(() => rmSync(path, { recursive: true, force: true }));
  return path;
}

export function taken<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

/** The first problem's code; "ok" for none. */
export function codeOf(outcome: Outcome<unknown>): string {
  return outcome.ok ? 'ok' : (outcome.problems[0]?.code as string);
}

export const perSize: Variance = { parts: [{ kind: 'per-size', correlation: null }], fixed: {} };
export const constant: Variance = { parts: [{ kind: 'constant', correlation: null }], fixed: {} };

/** A plan that differs from others of its kind by its title. */
export function planCalled(title: string, variance: Variance = perSize): Plan {
  return taken(
    readPlan(
      JSON.stringify({
        format: 'steelyard-plan/1',
        title,
        data: { file: 'cells.csv' },
        roles: { outcome: 'y', size: 'n' },
        terms: [{ column: 'x' }],
        variance,
      }),
    ),
  );
}

/** What the project room reads of a result: its structures with their coefficients, and the version. */
export function resultText({
  plan,
  slope,
  beside = [],
  version = '0.1.0',
}: {
  readonly plan: Plan;
  readonly slope: number;
  readonly beside?: readonly { readonly variance: unknown; readonly slope: number }[];
  readonly version?: string;
}): string {
  const coefficients = (estimate: number) => [{ term: 'x', estimate }];
  return `${JSON.stringify({
    plan,
    fit: { coefficients: coefficients(slope) },
    beside: beside.map((rival) => ({ variance: rival.variance, coefficients: coefficients(rival.slope) })),
    made: { version },
  })}\n`;
}

export const bytes = (text: string): Uint8Array => new TextEncoder().encode(text);

/** A clock that shows another second at every look, from the start of 2026. */
function ticking(): () => string {
  let seconds = 0;
  return () => new Date(Date.UTC(2026, 0, 1) + 1000 * seconds++).toISOString();
}

/** A new project with one plan, closed when the test is over. */
export function newProject(opening: Opening = {}): { project: Project; file: string; planId: number } {
  const file = join(folder(), 'care.steelyard');
  const project = taken(createProject(file, { clock: ticking(), ...opening }));
  onTestFinished(() => project.close());
  const sha256 = taken(project.keepInput(bytes('x,y,n\n1,2,3\n')));
  const inputs = [{ name: 'cells.csv', sha256 }];
  const planId = taken(project.addPlan({ name: 'Main', plan: planCalled('0'), inputs, author: 'Ada' }));
  return { project, file, planId };
}

/** Freezes an edition of the plan as it stands. */
export function freeze(
  project: Project,
  { planId, result, report }: { planId: number; result: string; report: string },
) {
  const fit = taken(project.keepFit({ planId, result }));
  const facts = project.nextEdition('Ada');
  taken(project.freezeEdition({ fit, facts, report: bytes(report) }));
  return facts;
}

/** Works on a project's file with no guard in the way, as an intruder or a failing disk would. */
export function tamper(file: string, ...statements: readonly string[]): void {
  const db = new Database(file);
  for (const statement of statements) db.exec(statement);
  db.close();
}

/** Statements, framed so that the guards of a table are out of their way and back afterwards. */
export function unguarded(file: string, table: string, ...statements: readonly string[]): void {
  const db = new Database(file);
  const guards = db
    .prepare("SELECT name, sql FROM sqlite_schema WHERE type = 'trigger' AND tbl_name = ?")
    .all(table) as {
    name: string;
    sql: string;
  }[];
  for (const { name } of guards) db.exec(`DROP TRIGGER ${name}`);
  for (const statement of statements) db.exec(statement);
  for (const { sql } of guards) db.exec(sql);
  db.close();
}

export function titleOf(project: Project, planId: number): string | null {
  const kept = project.plans().find((plan) => plan.planId === planId);
  return kept === undefined ? null : (JSON.parse(kept.plan) as Plan).title;
}
