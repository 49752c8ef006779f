/** The import arrows: who may import whom. */
const forbid = (name, from, to, comment) => ({
  name,
  severity: 'error',
  comment,
  from: { path: from },
  to: { path: to },
});

module.exports = {
  forbidden: [
    {
      name: 'no-cycles',
      severity: 'error',
      from: {},
      to: { circular: true, viaOnly: { dependencyTypesNot: ['type-only'] } },
    },
    forbid('nothing-imports-tests', '^(server|src|shared|demo)/', '^tests/', 'Tests are leaves.'),
    forbid('nothing-imports-demo', '^(server|src|shared)/', '^demo/', 'The demo is a leaf.'),
    forbid('shared-stands-alone', '^shared/', '^(server|src)/', 'shared is pure.'),
    forbid('client-and-server-apart', '^src/', '^server/', 'They meet in shared only, not even in a type.'),
    forbid('server-and-client-apart', '^server/', '^src/', 'They meet in shared only, not even in a type.'),
    forbid(
      'stochastic-knows-no-hospital',
      '^shared/stochastic/',
      '^shared/(forecasting|domain|api|charts)/',
      'Maths alone.',
    ),
    forbid(
      'forecasting',
      '^shared/forecasting/',
      '^shared/(api|charts)/',
      'forecasting imports stochastic and domain.',
    ),
    forbid('domain', '^shared/domain/', '^shared/(forecasting|stochastic|api|charts)/', 'domain stands alone.'),
    forbid('api', '^shared/api/', '^shared/(forecasting|stochastic|charts)/', 'api imports domain.'),
    forbid('charts', '^shared/charts/', '^shared/(api|stochastic)/', 'charts import result types and domain.'),
    {
      name: 'server-features-apart',
      severity: 'error',
      comment: 'Features meet in app, start, a job or an entity.',
      from: { path: '^server/features/([^/]+)/' },
      to: { path: '^server/features/', pathNot: '^server/features/$1/' },
    },
    {
      name: 'client-features-apart',
      severity: 'error',
      comment: 'Features meet in a page.',
      from: { path: '^src/features/([^/]+)/' },
      to: { path: '^src/features/', pathNot: '^src/features/$1/' },
    },
    forbid(
      'server-lower-layers',
      '^server/(entities|database|http|simulation|mail|config|errors|log|clock)',
      '^server/features/',
      'Features stand above.',
    ),
    forbid('entities', '^server/entities/', '^server/(database|http|jobs|simulation|mail)/', 'Entities are leaves.'),
    forbid(
      'pages-are-above',
      '^src/(features|components|lib)/',
      '^src/(app/(?!paths)|pages)/',
      'app and pages stand above; paths may be used by all.',
    ),
    forbid('components-know-no-feature', '^src/(components|lib)/', '^src/features/', 'Parts know no feature.'),
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '^(dist|node_modules)/' },
    tsPreCompilationDeps: true,
    tsConfig: { fileName: 'tsconfig.json' },
    enhancedResolveOptions: { conditionNames: ['import', 'types', 'node', 'default'], exportsFields: ['exports'] },
  },
};
