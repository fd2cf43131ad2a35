import { registerHooks } from 'node:module';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';

// For scripts that Node runs by itself: rooms import one another without extension, and by alias.

const root = join(import.meta.dirname, '../..');

registerHooks({
  resolve(specifier, context, next) {
    const alias = /^@(core|main)\/(.*)$/.exec(specifier);
    if (alias) return next(pathToFileURL(join(root, `src-${alias[1]}`, `${alias[2]}.ts`)).href, context);
    const isRoom = /^\.\.?\//.test(specifier) && /\/src-(core|main)\//.test(context.parentURL ?? '');
    return next(isRoom ? `${specifier}.ts` : specifier, context);
  },
});
