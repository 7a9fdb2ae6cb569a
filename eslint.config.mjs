import astro from 'eslint-plugin-astro';
import jsxA11y from 'eslint-plugin-jsx-a11y';
import reactHooks from 'eslint-plugin-react-hooks';
import tseslint from 'typescript-eslint';
import { noOuterDatabase } from './db/no-outer-database.mjs';

const typescriptFiles = ['**/*.ts', '**/*.tsx'];
const testFiles = ['**/*.test.ts', '**/*.test.tsx', 'tests/**'];

/** Full zod weighs 26 to 91 kB in a page; `zod/mini` weighs 5. */
const fullZod = {
  name: 'zod',
  message: 'Code that reaches the Floor uses zod/mini.',
};

/** Who may import whom is held by .dependency-cruiser.cjs; these are the packages that a layer may not touch. */
const browserPackages = ['react', 'react-dom', 'dexie', 'dexie-react-hooks', 'zustand', 'workbox-*'];
const serverPackages = ['kysely', 'better-sqlite3', 'better-auth', 'better-auth/*', 'pino', 'node:*'];

export default tseslint.config(
  {
    ignores: [
      'dist/',
      'data/',
      'coverage/',
      '.astro/',
      'node_modules/',
      'test-results/',
      'playwright-report/',
    ],
  },
  {
    linterOptions: { reportUnusedDisableDirectives: 'error' },
  },
  {
    files: typescriptFiles,
    extends: [tseslint.configs.strictTypeChecked, tseslint.configs.stylisticTypeChecked],
    languageOptions: { parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname } },
    rules: {
      // Numbers read well inside a sentence; anything else in one is a slip.
      '@typescript-eslint/restrict-template-expressions': ['error', { allowNumber: true }],
      '@typescript-eslint/no-confusing-void-expression': ['error', { ignoreArrowShorthand: true }],
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', caughtErrors: 'all' }],
      '@typescript-eslint/consistent-type-imports': 'error',
      '@typescript-eslint/switch-exhaustiveness-check': [
        'error',
        { considerDefaultExhaustiveForUnions: true },
      ],
      '@typescript-eslint/ban-ts-comment': ['error', { 'ts-expect-error': 'allow-with-description' }],
      // An empty string is as good as none where people type.
      '@typescript-eslint/prefer-nullish-coalescing': ['error', { ignorePrimitives: { string: true } }],
      // The repositories return what they promise: an async function without await is a uniform signature.
      '@typescript-eslint/require-await': 'off',
      'no-console': ['error', { allow: ['error', 'warn'] }],
      'no-restricted-syntax': [
        'error',
        {
          selector: 'ExportDefaultDeclaration',
          message: 'Export by name, so that one search finds every use.',
        },
      ],
      eqeqeq: 'error',
    },
  },
  {
    files: ['**/*.config.ts'],
    rules: { 'no-restricted-syntax': 'off' },
  },
  {
    files: ['src/commands/**', 'src/worker/**'],
    rules: { 'no-console': 'off' },
  },
  {
    files: ['src/domain/**'],
    ignores: ['**/*.test.ts'],
    rules: {
      'no-restricted-imports': [
        'error',
        { patterns: [...browserPackages, ...serverPackages, 'astro', 'astro:*'] },
      ],
      'no-restricted-globals': [
        'error',
        'window',
        'document',
        'fetch',
        'localStorage',
        'indexedDB',
        'process',
      ],
      'no-restricted-properties': [
        'error',
        { object: 'Date', property: 'now', message: 'The clock is an argument.' },
        { object: 'Math', property: 'random', message: 'Ids and chance are arguments.' },
      ],
    },
  },
  {
    files: ['src/domain/entry.ts', 'src/domain/plan.ts', 'src/domain/job.ts', 'src/domain/trail.ts'],
    rules: {
      'no-restricted-imports': [
        'error',
        { paths: [fullZod], patterns: [...browserPackages, ...serverPackages, 'astro', 'astro:*'] },
      ],
    },
  },
  {
    files: ['src/offline/**', 'src/features/**', 'src/components/**', 'src/worker/**'],
    // The integration beside the worker runs in the build, not in the browser.
    ignores: [...testFiles, 'src/worker/integration.mjs'],
    rules: { 'no-restricted-imports': ['error', { paths: [fullZod], patterns: serverPackages }] },
  },
  {
    files: ['src/server/**', 'db/**'],
    ignores: testFiles,
    rules: { 'no-restricted-imports': ['error', { patterns: browserPackages }] },
  },
  {
    files: typescriptFiles,
    plugins: { local: { rules: { 'no-outer-database': noOuterDatabase } } },
    rules: { 'local/no-outer-database': 'error' },
  },
  {
    files: ['src/**/*.tsx'],
    extends: [reactHooks.configs.flat['recommended-latest']],
    // The plugin itself comes with the Astro rules below; a second copy of it would be refused.
    rules: jsxA11y.flatConfigs.strict.rules,
  },
  {
    files: testFiles,
    rules: {
      // Matchers such as expect.any() are typed any.
      '@typescript-eslint/no-unsafe-assignment': 'off',
      // Test data is indexed and asserted on; a wrong index fails the test by itself.
      '@typescript-eslint/no-non-null-assertion': 'off',
      '@typescript-eslint/unbound-method': 'off',
    },
  },
  {
    files: ['**/*.mjs', '**/*.cjs'],
    extends: [tseslint.configs.recommended],
    rules: { eqeqeq: 'error' },
  },
  ...astro.configs.recommended,
  ...astro.configs['jsx-a11y-strict'],
  {
    files: ['**/*.astro'],
    rules: { 'astro/no-set-html-directive': 'error' },
  },
);
