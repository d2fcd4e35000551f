import { defineConfig } from 'vitest/config';

const needsServer = ['tests/api/**/*.test.ts', 'tests/e2e/**/*.{test,spec}.ts'];

export default defineConfig({
  resolve: { alias: { '@': import.meta.dirname } },
  test: {
    testTimeout: 30_000,
    hookTimeout: 120_000,
    pool: 'forks',
    projects: [
      {
        extends: true,
        test: {
          name: 'parts',
          include: ['tests/**/*.test.ts', 'tests/**/*.test.tsx'],
          exclude: needsServer,
          globalSetup: ['tests/helpers/compile-kernels.ts'],
          maxWorkers: 2,
          sequence: { groupOrder: 0 },
        },
      },
      {
        extends: true,
        test: {
          // These share one running product, each file in laboratories of its own; they come after the others.
          name: 'server',
          include: needsServer,
          globalSetup: ['tests/helpers/start-shared-server.ts'],
          maxWorkers: 2,
          testTimeout: 120_000,
          sequence: { groupOrder: 1 },
        },
      },
    ],
  },
});
