// The engine's thread from its sources, as tests start it: Node strips the types, and this finds the files that the bundler would find.
import { existsSync } from 'node:fs';
import { registerHooks } from 'node:module';
import { pathToFileURL } from 'node:url';

const root = new URL('../../', import.meta.url);

registerHooks({
  resolve: (specifier, context, next) => {
    const wanted = specifier.startsWith('@core/')
      ? new URL(`src-core/${specifier.slice('@core/'.length)}.ts`, root)
      : /^\.{1,2}\//.test(specifier) && context.parentURL?.startsWith(root.href)
        ? new URL(`${specifier}.ts`, context.parentURL)
        : null;
    return wanted !== null && existsSync(wanted) ? next(wanted.href, context) : next(specifier, context);
  },
});
await import(pathToFileURL(new URL('src-main/engine/engine.worker.ts', root).pathname).href);
