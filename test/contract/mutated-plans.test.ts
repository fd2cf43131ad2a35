import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { faultsIn } from '@core/protocol/faults';
import { planSchema } from '@core/protocol/plan-schema';
import { below, stepsOf } from '@core/protocol/pointer';
import type { Problem } from '@core/protocol/problems';
import { normalPlan, normalTabulation } from '@core/protocol/read';
import { tabulationSchema } from '@core/protocol/tabulation-schema';
import fc from 'fast-check';
import * as v from 'valibot';
import { describe, expect, it } from 'vitest';

const folder = join(import.meta.dirname, 'files');

function documents(name: 'valid' | 'tabulation'): unknown[] {
  return readdirSync(join(folder, name))
    .filter((file) => file.endsWith('.json') && file !== 'invalid.json')
    .map((file) => JSON.parse(readFileSync(join(folder, name, file), 'utf8')) as unknown);
}

const words = ['column', 'kind', 'as', 'power', 'product', 'by', 'parts', 'correlation', 'rounding', 'file', 'zzz'];
const values = fc.oneof(
  fc.constantFrom<unknown>(null, true, 0, -1, 1.5, 95, 1e300, '', 'given', 'between', 'a', [], {}, ['a'], [null], [[]]),
  fc.constantFrom<unknown>({ column: 'a' }, { kind: 'shared', by: ['a'] }, { from: 1 }, { parts: [] }),
);

/** Replaces, removes or adds one value somewhere in a document. */
function mutate(document: unknown, path: readonly number[], value: unknown, word: string): unknown {
  const copy = structuredClone(document) as Record<string, unknown>;
  let holder = copy;
  for (const n of path) {
    const keys = Object.keys(holder);
    const key = keys[n % Math.max(1, keys.length)];
    const next = key === undefined ? null : holder[key];
    if (typeof next !== 'object' || next === null) break;
    holder = next as Record<string, unknown>;
  }
  const keys = Object.keys(holder);
  const key = keys[(path[0] ?? 0) % Math.max(1, keys.length)];
  if (Array.isArray(holder)) {
    if ((path[1] ?? 0) % 2 === 0) holder.splice(0, 1);
    else holder.push(value);
  } else if (key === undefined || (path[1] ?? 0) % 3 === 0) holder[word] = value;
  else if ((path[1] ?? 0) % 3 === 1) delete holder[key];
  else holder[key] = value;
  return copy;
}

function mutated(name: 'valid' | 'tabulation') {
  const change = fc.tuple(fc.array(fc.nat(50), { minLength: 2, maxLength: 7 }), values, fc.constantFrom(...words));
  return fc
    .tuple(fc.constantFrom(...documents(name)), fc.array(change, { minLength: 1, maxLength: 3 }))
    .map(([document, changes]) =>
      changes.reduce((changed, [path, value, word]) => mutate(changed, path, value, word), document),
    );
}

/** What stands at a pointer; undefined where nothing does. */
function placeIn(document: unknown, at: string): unknown {
  let holder = document;
  for (const step of stepsOf(at)) {
    if (typeof holder !== 'object' || holder === null || !Object.hasOwn(holder, step)) return undefined;
    holder = (holder as Record<string, unknown>)[step];
  }
  return holder;
}

/** Every pointer of a document, in the order in which its text names them. */
function placesOf(document: unknown, at: string): string[] {
  if (typeof document !== 'object' || document === null) return [at];
  return [at, ...Object.entries(document).flatMap(([key, value]) => placesOf(value, below(at, key)))];
}

describe.each([
  { name: 'valid' as const, schema: planSchema as v.GenericSchema, normal: normalPlan },
  { name: 'tabulation' as const, schema: tabulationSchema as v.GenericSchema, normal: normalTabulation },
])('documents made from $name by changes anywhere', ({ name, schema, normal }) => {
  it('have a fault exactly where the validator of the schema refuses them', () => {
    let refused = 0;
    let accepted = 0;
    fc.assert(
      fc.property(mutated(name), (document) => {
        const faults = faultsIn(schema, document);
        const found = faults.length === 0;
        // The validator takes a list for an object and passes over a map's key "constructor"; the walk does neither.
        const passedOver = ({ at }: Problem) =>
          Array.isArray(placeIn(document, at ?? '')) || stepsOf(at ?? '').includes('constructor');
        if (found || !faults.every(passedOver)) expect(v.safeParse(schema, document).success).toBe(found);
        if (found) accepted++;
        else refused++;
      }),
      { numRuns: 3000, seed: 8 },
    );
    expect(Math.min(refused, accepted)).toBeGreaterThan(100);
  });

  it('are refused at places that are in the document, in document order, or have a normal form that is its own', () => {
    fc.assert(
      fc.property(mutated(name), (document) => {
        const found = normal(document);
        if (!found.ok) {
          expect(found.problems.length).toBeGreaterThan(0);
          const places = placesOf(document, '');
          const order = found.problems.map(({ at }) => places.indexOf(at ?? 'none'));
          expect(Math.min(...order)).toBeGreaterThanOrEqual(0);
          expect(order).toEqual([...order].sort((a, b) => a - b));
          return;
        }
        const again = normal(found.value);
        expect(again.ok && JSON.stringify(again.value)).toBe(JSON.stringify(found.value));
      }),
      { numRuns: 2000, seed: 9 },
    );
  });
});
