// `npm run golden`: derives the golden values again and shows what differs; `-- --accept` takes the new ones.
import { existsSync, writeFileSync } from 'node:fs';
import { derived, goldenFile, known } from './golden.ts';

const before = existsSync(goldenFile) ? known() : {};
const after = derived();
for (const [name, hash] of Object.entries(after))
  console.log(
    before[name] === hash ? `same     ${name}` : `differs  ${name}: ${before[name] ?? 'not known'} became ${hash}`,
  );
if (process.argv.includes('--accept')) writeFileSync(goldenFile, `${JSON.stringify(after, null, 2)}\n`);
