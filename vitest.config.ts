import { availableParallelism } from 'node:os';
import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

const alias = {
  '@': fileURLToPath(new URL('./src', import.meta.url)),
  '@db': fileURLToPath(new URL('./db', import.meta.url)),
  // As it is built.
  dexie: 'dexie/dist/modern/dexie.mjs',
};

/** One project an environment: browser-shaped tests name themselves `*.test.tsx` or lie in `offline`. */
export default defineConfig({
  resolve: { alias },
  test: {
    // By itself the runner leaves one core to others, which on two cores halves it.
    maxWorkers: Math.max(2, availableParallelism() - 1),
    setupFiles: ['tests/support/setup.ts'],
    projects: [
      {
        extends: true,
        test: {
          name: 'node',
          environment: 'node',
          include: [
            'src/**/*.test.ts',
            'db/**/*.test.ts',
            'tests/{standards,integration,support}/**/*.test.ts',
          ],
          exclude: ['src/{features,components,offline}/**'],
        },
      },
      {
        extends: true,
        test: {
          name: 'browser-shaped',
          environment: 'jsdom',
          include: ['src/{features,components,offline}/**/*.test.{ts,tsx}'],
          // The common set-up comes by `extends`; named again it would run twice.
          setupFiles: ['tests/support/setup-dom.ts'],
        },
      },
    ],
  },
});
