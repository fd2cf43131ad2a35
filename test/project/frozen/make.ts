// Made v10.steelyard, when layout 10 was the newest: `node test/project/frozen/make.ts [FILE]`. It is kept as it is, so that every later layout is reached from it.
import { rmSync } from 'node:fs';
import { join } from 'node:path';
import type { Outcome } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import '../rooms.ts';

const { readPlan } = (await import('@core/protocol/read')) as typeof import('@core/protocol/read');
const { createProject } = (await import('@main/project/project')) as typeof import('@main/project/project');

function taken<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

function planCalled(title: string): Plan {
  const roles = { outcome: 'y', size: 'n' };
  const variance = { parts: [{ kind: 'per-size' }] };
  const data = { file: 'cells.csv' };
  return taken(readPlan(JSON.stringify({ format: 'steelyard-plan/1', title, data, roles, variance })));
}

const file = process.argv[2] ?? join(import.meta.dirname, 'v10.steelyard');
rmSync(file, { force: true });
let seconds = 0;
const clock = () => new Date(Date.UTC(2026, 0, 1) + 1000 * seconds++).toISOString();
const project = taken(createProject(file, { clock }));
const author = 'Ada Müller';
const sha256 = taken(project.keepInput(new TextEncoder().encode('y,n\n1,20\n2,30\n')));
const inputs = [{ name: 'cells.csv', sha256 }];
const planId = taken(project.addPlan({ name: 'Main', plan: planCalled('first'), inputs, author }));
taken(project.changePlan({ planId, action: 'title', plan: planCalled('second'), author }));
const coefficients = [{ term: 'intercept', estimate: 1.6 }];
const result = { plan: planCalled('second'), fit: { coefficients }, beside: [], made: { version: '0.1.0' } };
const fit = taken(project.keepFit({ planId, result: JSON.stringify(result), author }));
taken(project.decide({ author, text: 'Both cells are kept.' }));
taken(project.freezeEdition({ fit, facts: project.nextEdition(author), report: new TextEncoder().encode('pages') }));
taken(project.signOff({ edition: 1, role: 'reviewer', author: 'Bo' }));
taken(project.setNote({ place: 'summary', text: 'A note.', author }));
taken(project.changePlan({ planId, action: 'title', plan: planCalled('third'), author }));
taken(project.undo());
project.close();
