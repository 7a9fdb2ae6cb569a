/*
 * Who may import whom. Each rule names the folder it guards and says what else there is to do.
 * Astro files are not read by this tool: eslint.config.mjs holds their imports.
 */

/** Everything in src except the named folders. */
const srcExcept = (...folders) => `^src/(?!(?:${folders.join('|')})(?:/|\\.))`;
/** The test beside a module may import what it needs to set the module up. */
const NOT_TESTS = '\\.test\\.tsx?$';

/** @type {import('dependency-cruiser').IConfiguration} */
module.exports = {
  forbidden: [
    {
      name: 'no-cycles',
      severity: 'error',
      comment: 'Move what both need into a module of its own, named after its subject.',
      from: {},
      to: { circular: true },
    },
    {
      name: 'no-unresolved',
      severity: 'error',
      from: { path: '^(src|db|tests)/' },
      to: { couldNotResolve: true, pathNot: ['^astro:', '^virtual:', 'dist/server/serve\\.mjs$'] },
    },
    {
      name: 'no-barrels',
      severity: 'error',
      comment: 'Import from the module that defines the name. An index file is only for a route.',
      from: {},
      to: { path: '^(src|db)/(?!pages/).*index\\.[cm]?[jt]sx?$' },
    },
    {
      name: 'no-drawers',
      severity: 'error',
      comment: 'Name a module after its subject.',
      from: {},
      to: { path: ['^(src|db|tests)/.*/(lib|utils?|helpers|common|types|misc)/'] },
    },
    {
      name: 'program-without-development-packages',
      severity: 'error',
      comment: 'Move the package to dependencies if the program needs it.',
      from: {
        path: '^(src|db)/',
        pathNot: [NOT_TESTS, '^src/commands/(test|simulate|write-schemas)\\.mjs$'],
      },
      to: { dependencyTypes: ['npm-dev'], dependencyTypesNot: ['type-only'], pathNot: '/@types/' },
    },
    {
      name: 'program-without-tests',
      severity: 'error',
      from: { path: '^(src|db)/', pathNot: NOT_TESTS },
      to: { path: ['^tests/', NOT_TESTS] },
    },
    {
      name: 'domain-stands-alone',
      severity: 'error',
      comment:
        'The rules run unchanged in the browser, on the server and in the verifier: pass in what does I/O.',
      from: { path: '^src/domain/', pathNot: NOT_TESTS },
      to: { path: [srcExcept('domain'), '^db/'] },
    },
    {
      name: 'domain-without-node',
      severity: 'error',
      from: { path: '^src/domain/', pathNot: NOT_TESTS },
      to: { dependencyTypes: ['core'] },
    },
    {
      name: 'components-know-no-domain',
      severity: 'error',
      comment: 'A component takes words and numbers; the feature translates.',
      from: { path: '^src/components/', pathNot: NOT_TESTS },
      to: { path: [srcExcept('components', 'styles'), '^db/'] },
    },
    {
      name: 'offline-imports-domain-only',
      severity: 'error',
      from: { path: '^src/offline/', pathNot: NOT_TESTS },
      to: { path: [srcExcept('offline', 'domain'), '^db/'] },
    },
    {
      name: 'worker-stands-alone',
      severity: 'error',
      from: { path: '^src/worker/', pathNot: NOT_TESTS },
      to: { path: [srcExcept('worker'), '^db/'] },
    },
    {
      name: 'server-imports-domain-and-row-types',
      severity: 'error',
      comment: 'Only the composition module may reach past the row types, to bring the tables up to date.',
      from: { path: '^src/server/', pathNot: [NOT_TESTS, '^src/server/compose\\.ts$'] },
      to: { path: [srcExcept('server', 'domain'), '^db/(?!tables\\.ts$)'] },
    },
    {
      name: 'composition-imports-server-domain-and-db',
      severity: 'error',
      from: { path: '^src/server/compose\\.ts$' },
      to: { path: srcExcept('server', 'domain') },
    },
    {
      name: 'features-never-reach-the-server',
      severity: 'error',
      comment: 'A feature asks over HTTP, or takes what the page gives it.',
      from: { path: '^src/features/', pathNot: NOT_TESTS },
      to: { path: [srcExcept('features', 'domain', 'offline', 'components', 'styles'), '^db/'] },
    },
    {
      name: 'features-never-import-each-other',
      severity: 'error',
      comment: 'What two features share is a component, or belongs to the domain.',
      from: { path: '^src/features/([^/]+)/', pathNot: NOT_TESTS },
      to: { path: '^src/features/', pathNot: '^src/features/$1/' },
    },
    {
      name: 'routes-import-server-and-domain',
      severity: 'error',
      from: { path: ['^src/pages/api/', '^src/middleware\\.ts$'], pathNot: NOT_TESTS },
      to: { path: [srcExcept('server', 'domain', 'pages/api'), '^db/'] },
    },
    {
      name: 'commands-import-server-and-domain',
      severity: 'error',
      from: { path: '^src/commands/', pathNot: NOT_TESTS },
      to: { path: srcExcept('commands', 'server', 'domain') },
    },
    {
      name: 'db-imports-server-and-domain',
      severity: 'error',
      from: { path: '^db/', pathNot: NOT_TESTS },
      to: { path: srcExcept('server', 'domain') },
    },
    {
      name: 'migrations-import-kysely-only',
      severity: 'error',
      comment: 'A migration is frozen: it may not change because something that it imports does.',
      from: { path: '^db/migrations/', pathNot: NOT_TESTS },
      to: { pathNot: ['^db/migrations/', 'node_modules/kysely/'] },
    },
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '^(dist|data|coverage|public)/' },
    tsConfig: { fileName: 'tsconfig.json' },
    // Types count: a layer that needs another's types depends on it.
    tsPreCompilationDeps: true,
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'types', 'node', 'default'],
      extensions: ['.ts', '.tsx', '.mjs', '.js', '.json', '.astro'],
    },
  },
};
