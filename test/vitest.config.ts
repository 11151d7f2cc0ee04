import { defineConfig } from 'vitest/config';

/** Long checks (`*.long.test.ts`) run only by `npm run test:long`. */
const LONG = process.env.SIDELONG_LONG === '1';

export default defineConfig({
  root: new URL('..', import.meta.url).pathname,
  oxc: { jsx: { runtime: 'automatic', importSource: 'preact' } },
  test: {
    include: LONG ? ['test/**/*.long.test.ts'] : ['test/**/*.test.ts', 'test/**/*.test.tsx'],
    exclude: LONG ? ['node_modules/**'] : ['node_modules/**', 'test/**/*.long.test.ts'],
    pool: 'forks',
    testTimeout: LONG ? 3_600_000 : 30_000,
    hookTimeout: LONG ? 3_600_000 : 60_000,
  },
});
