import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { nearestName } from '@core/protocol/nearest';
import { done, type Outcome, refuse } from '@core/protocol/outcome';

const names = ['plan', 'tabulation', 'result'];

/** The JSON Schema of one of the three formats, as it stands in the program's resources. */
export function schemaText(name: string, resources: string): Outcome<string> {
  if (!names.includes(name)) return refuse('unknown-kind', { found: name, nearest: nearestName(name, names) });
  return done(readFileSync(join(resources, 'schemas', `${name}.json`), 'utf8'));
}
