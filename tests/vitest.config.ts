import { defineConfig } from 'vitest/config';
import { fileURLToPath } from 'node:url';

/** One settings file for every group of tests; `docker-free-scripts/test.sh` names the groups. */
export default defineConfig({
  root: fileURLToPath(new URL('..', import.meta.url)),
  resolve: { conditions: ['source'] },
  ssr: { resolve: { conditions: ['source'] } },
  oxc: { decorator: { legacy: true } },
  test: {
    include: ['packages/**/src/**/*.test.ts', 'apps/**/src/**/*.test.ts', 'tests/**/*.test.ts'],
    passWithNoTests: false,
    testTimeout: 120_000,
    hookTimeout: 120_000,
    maxWorkers: 2,
  },
});
