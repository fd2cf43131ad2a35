import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { schemaTexts } from './make';

const folder = join(import.meta.dirname, '../../resources/schemas');

describe('the JSON Schemas in the resources', () => {
  it.each(Object.entries(schemaTexts()))(
    '%s.json is what the validator gives today (npm run schemas)',
    (name, text) => {
      expect(readFileSync(join(folder, `${name}.json`), 'utf8')).toBe(text);
    },
  );

  it('refuse keys that no object of a plan has, and leave out none that it must have', () => {
    const plan = JSON.parse(schemaTexts()['plan'] as string) as Record<string, unknown>;
    expect(plan['additionalProperties']).toBe(false);
    expect(plan['required']).toEqual(['format', 'data', 'roles', 'variance']);
    expect(plan['title']).toBe('steelyard-plan/1');
    expect(Object.keys(plan['$defs'] as object)).toEqual(['variance', 'term']);
  });
});
