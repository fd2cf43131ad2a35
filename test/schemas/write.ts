import { mkdirSync, writeFileSync } from 'node:fs';
import { registerHooks } from 'node:module';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';

// Writes resources/schemas from the validators: `node test/schemas/write.ts`, or `npm run schemas`.

const root = join(import.meta.dirname, '../..');

// Rooms import one another without extension, and tests import them by alias; node by itself resolves neither.
registerHooks({
  resolve(specifier, context, next) {
    if (specifier.startsWith('@core/'))
      return next(pathToFileURL(join(root, 'src-core', `${specifier.slice(6)}.ts`)).href, context);
    const isRoom = /^\.\.?\//.test(specifier) && context.parentURL?.includes('/src-core/') === true;
    return next(isRoom ? `${specifier}.ts` : specifier, context);
  },
});

const { schemaTexts } = (await import('./make.ts')) as typeof import('./make');
const folder = join(root, 'resources/schemas');
mkdirSync(folder, { recursive: true });
for (const [name, text] of Object.entries(schemaTexts())) writeFileSync(join(folder, `${name}.json`), text);
