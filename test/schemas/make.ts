import { planSchema } from '@core/protocol/plan-schema';
import { resultSchema, sharedByResult } from '@core/protocol/result-schema';
import { tabulationSchema } from '@core/protocol/tabulation-schema';
import { termSchema, varianceSchema } from '@core/protocol/variance-schema';
import { toJsonSchema } from '@valibot/to-json-schema';
import type { GenericSchema } from 'valibot';

const of: Record<string, { schema: GenericSchema; definitions: Record<string, GenericSchema> }> = {
  plan: { schema: planSchema, definitions: { variance: varianceSchema, term: termSchema } },
  tabulation: { schema: tabulationSchema, definitions: {} },
  result: {
    schema: resultSchema,
    definitions: { plan: planSchema, variance: varianceSchema, term: termSchema, ...sharedByResult },
  },
};

/** The JSON Schemas as the validators give them today: name to the text of its file. */
export function schemaTexts(): Record<string, string> {
  const made = Object.entries(of).map(([name, { schema, definitions }]) => {
    const json = toJsonSchema(schema, { target: 'draft-2020-12', errorMode: 'throw', definitions });
    const { $schema, ...rest } = json;
    return [name, `${JSON.stringify({ $schema, title: `steelyard-${name}/1`, ...rest }, null, 2)}\n`];
  });
  return Object.fromEntries(made) as Record<string, string>;
}
