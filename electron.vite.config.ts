import { resolve } from 'node:path';
import { svelte } from '@sveltejs/vite-plugin-svelte';
import { defineConfig } from 'electron-vite';
import { thirdParty } from './third-party.ts';

const at = (path: string) => resolve(import.meta.dirname, path);
const root = import.meta.dirname;
const fonts = { 'DejaVu fonts 2.37': at('resources/fonts/LICENSE') };
const alias = { '@core': at('src-core') };

export default defineConfig({
  main: {
    resolve: { alias },
    plugins: [thirdParty({ root, along: ['better-sqlite3', 'pdfkit'], texts: fonts })],
    build: {
      outDir: 'out/main',
      externalizeDeps: false,
      rolldownOptions: {
        // `build.lib` breaks `?modulePath` here: inputs are named instead.
        input: { main: at('src-main/main.ts'), command: at('src-main/command/command.ts') },
        external: ['better-sqlite3', 'pdfkit'],
        output: { format: 'es', entryFileNames: '[name].js', chunkFileNames: '[name]-[hash].js' },
      },
    },
  },
  preload: {
    resolve: { alias },
    plugins: [thirdParty({ root })],
    build: {
      outDir: 'out/preload',
      externalizeDeps: false, // a sandboxed preload is one CJS file that requires `electron` alone
      rolldownOptions: {
        input: { preload: at('src-main/preload.ts') },
        output: { format: 'cjs', entryFileNames: '[name].cjs' },
      },
    },
  },
  renderer: {
    root: at('src-renderer'),
    resolve: { alias },
    plugins: [svelte({ configFile: at('svelte.config.js') }), thirdParty({ root, texts: fonts })],
    build: {
      outDir: at('out/renderer'),
      modulePreload: { polyfill: false },
      assetsInlineLimit: 0, // no data: addresses, so that the content policy stays strict
      rolldownOptions: { input: at('src-renderer/index.html') },
    },
  },
});
