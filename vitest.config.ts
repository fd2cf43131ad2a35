import { resolve } from 'node:path';
import { defineConfig } from 'vitest/config';

const alias = {
  '@core': resolve(import.meta.dirname, 'src-core'),
  '@main': resolve(import.meta.dirname, 'src-main'),
};

export default defineConfig({
  test: {
    // One for every core of a small machine: the default leaves one idle.
    maxWorkers: 2,
    projects: [
      {
        resolve: { alias },
        test: {
          name: 'rooms',
          include: ['test/**/*.test.ts'],
          exclude: ['test/checks/must-fail/**'],
          environment: 'node',
          env: { TZ: 'UTC', LC_ALL: 'C.UTF-8' },
          testTimeout: 60_000,
        },
      },
      {
        resolve: { alias },
        test: {
          name: 'journeys',
          include: ['test/journeys/**/*.spec.ts'],
          environment: 'node',
          env: { TZ: 'UTC', LC_ALL: 'C.UTF-8' },
          globalSetup: ['test/standin/global-setup.ts'],
          pool: 'forks',
          testTimeout: 60_000,
          hookTimeout: 60_000,
        },
      },
    ],
  },
});
