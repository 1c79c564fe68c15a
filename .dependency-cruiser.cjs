/** The doors of the house, by pattern: which room may import from which. */
const not = (name, comment, from, to) => ({ name, comment, severity: 'error', from, to });

module.exports = {
  forbidden: [
    not(
      'no-cycles',
      'Modules that need each other are one module, or miss a third.',
      {},
      {
        circular: true,
        viaOnly: { dependencyTypesNot: ['type-only'] },
      },
    ),
    not('everything-resolves', 'An import must lead somewhere.', {}, { couldNotResolve: true }),
    not('browser-knows-no-server', 'Both sides meet in shared/contracts.', { path: '^src/' }, { path: '^server/' }),
    not('server-knows-no-browser', 'Both sides meet in shared/contracts.', { path: '^server/' }, { path: '^src/' }),
    not(
      'shared-stands-alone',
      'shared runs on both sides: zod and itself, nothing else.',
      { path: '^shared/' },
      {
        pathNot: ['^shared/', '^node_modules/zod/', '^node_modules/ml-(matrix|regression-multivariate-linear)/'],
      },
    ),
    not(
      'matrix-packages-stay-in-statistics',
      'Only the statistics know how a regression is computed.',
      { path: '^(shared|src)/', pathNot: '^shared/statistics/' },
      { path: '^node_modules/ml-' },
    ),
    not(
      'statistics-stand-alone',
      'Arithmetic without I/O, parsing or planning words.',
      { path: '^shared/statistics/' },
      {
        pathNot: ['^shared/statistics/', '^node_modules/ml-(matrix|regression-multivariate-linear)/'],
      },
    ),
    not(
      'client-feature-inside',
      'A feature uses another one only through its queries.ts; pages that need both compose them in src/app.',
      { path: '^src/features/([^/]+)/' },
      { path: '^src/features/', pathNot: ['^src/features/$1/', '^src/features/[^/]+/queries\\.ts$'] },
    ),
    not(
      'features-know-no-app',
      'app → features → components, lib.',
      { path: '^src/features/' },
      { path: '^src/(app/|main\\.tsx$)' },
    ),
    not(
      'components-know-no-feature',
      'The design system serves every feature alike.',
      { path: '^src/(components|lib)/' },
      {
        path: '^src/(app|features)/',
      },
    ),
    not(
      'server-feature-inside',
      'A feature uses another one only through its service.',
      { path: '^server/features/([^/]+)/' },
      { path: '^server/features/', pathNot: ['^server/features/$1/', '\\.service\\.ts$'] },
    ),
    not(
      'routers-know-no-rows',
      'A router speaks HTTP and calls its service.',
      { path: '\\.router\\.ts$' },
      {
        path: ['\\.repository\\.ts$', '^server/models/', '^node_modules/(sequelize|pg|pg-copy-streams)/'],
      },
    ),
    not(
      'services-know-no-http',
      'A use case can be called from a job as well.',
      { path: '\\.(service|repository)\\.ts$' },
      {
        path: ['\\.router\\.ts$', '^node_modules/(express|multer)/'],
        dependencyTypesNot: ['type-only'],
      },
    ),
    not(
      'forecasting-is-arithmetic',
      'No HTTP and no SQL between sales and forecast.',
      { path: '^server/(forecasting|workbooks)/' },
      {
        path: ['^server/(features|models|mail)/', '^node_modules/(express|sequelize|pg|graphile-worker)/'],
      },
    ),
    not(
      'production-knows-no-tests',
      'What runs at a customer needs no test.',
      { path: '^(src|server|shared|seed-data)/' },
      {
        path: '^(tests|e2e)/',
      },
    ),
    not(
      'production-needs-no-development-packages',
      'What runs at a customer must stand under dependencies.',
      { path: '^(src|server|shared)/', pathNot: '^server/cli/' },
      { dependencyTypes: ['npm-dev'], dependencyTypesNot: ['type-only'] },
    ),
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '^(dist|coverage|\\.data)' },
    tsConfig: { fileName: 'tsconfig.json' },
    tsPreCompilationDeps: true,
    moduleSystems: ['es6', 'cjs'],
    enhancedResolveOptions: { exportsFields: ['exports'], conditionNames: ['import', 'node', 'default', 'types'] },
  },
};
