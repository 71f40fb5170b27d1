/**
 * Which way imports may go:
 *
 *   server ──┐
 *            ├──▶ shared/contract ──▶ shared/domain
 *   src    ──┘    (src takes only types from the contract, so that zod stays out of the browser)
 *
 * test/domain/architecture.spec.ts plants a breach of each rule.
 */
const packages = '(^|/)node_modules/';

/** @type {import('dependency-cruiser').IConfiguration} */
module.exports = {
  forbidden: [
    {
      name: 'domain-is-alone',
      comment: 'Rules and numbers know nothing outside shared/domain: no Node, no DOM, no package.',
      severity: 'error',
      from: { path: '^shared/domain/', pathNot: '^shared/domain/phone-number\\.ts$' },
      to: { pathNot: '^shared/domain/' },
    },
    {
      name: 'phone-numbers-have-their-library',
      comment: 'The one rule with a package: numbering plans are data that others keep current.',
      severity: 'error',
      from: { path: '^shared/domain/phone-number\\.ts$' },
      to: { pathNot: ['^shared/domain/', `${packages}libphonenumber-js/`] },
    },
    {
      name: 'contract-is-schemas',
      comment: 'What crosses the wire: zod and the domain, nothing else.',
      severity: 'error',
      from: { path: '^shared/contract/' },
      to: { pathNot: ['^shared/', `${packages}zod/`] },
    },
    {
      name: 'server-knows-no-screen',
      severity: 'error',
      from: { path: '^server/' },
      to: { path: ['^src/', '^test/', `${packages}(@angular|leaflet|chart\\.js)/`] },
    },
    {
      name: 'server-calls-no-socket',
      comment: 'Only the drill does: it plays the people at their screens.',
      severity: 'error',
      from: { path: '^server/', pathNot: '^server/drill-program/' },
      to: { path: `${packages}socket\\.io-client/` },
    },
    {
      name: 'screen-knows-no-server',
      severity: 'error',
      from: { path: '^src/' },
      to: {
        path: [
          '^server/',
          `${packages}(express|sequelize|mariadb|socket\\.io|twilio|pino|zod|umzug|passport)/`,
        ],
      },
    },
    {
      name: 'screen-uses-no-node',
      severity: 'error',
      from: { path: '^src/', pathNot: '\\.spec\\.ts$' },
      to: { dependencyTypes: ['core'] },
    },
    {
      name: 'screen-takes-types-of-the-contract',
      comment:
        'paths.ts is plain data; any other file of the contract would bring zod to the browser.',
      severity: 'error',
      from: { path: '^src/', pathNot: '\\.spec\\.ts$' },
      to: {
        path: '^shared/contract/',
        pathNot: '^shared/contract/paths\\.ts$',
        dependencyTypesNot: ['type-only'],
      },
    },
    {
      name: 'only-routes-know-http',
      severity: 'error',
      from: {
        path: '^server/',
        pathNot: [
          '^server/app\\.ts$',
          '^server/http/',
          '^server/fakes/',
          '-(routes|webhooks)\\.ts$',
          // Files served as they are; the sign-in strategy; the same session for sockets as for requests.
          '^server/region/serve-tiles\\.ts$',
          '^server/staff/person\\.ts$',
          '^server/realtime/sockets\\.ts$',
        ],
      },
      to: {
        path: `${packages}(express|express-session|express-rate-limit|passport|passport-local|helmet|compression)/`,
      },
    },
    {
      name: 'only-realtime-knows-sockets',
      severity: 'error',
      from: { path: '^server/', pathNot: '^server/realtime/' },
      to: { path: `${packages}(socket\\.io|engine\\.io)/` },
    },
    {
      name: 'only-the-fake-and-the-sender-know-the-text-service',
      severity: 'error',
      from: { path: '^server/', pathNot: '^server/(texts|fakes)/' },
      to: { path: `${packages}twilio/` },
    },
    {
      name: 'no-circle',
      severity: 'error',
      from: { path: '^(server|shared|src)/' },
      to: { circular: true, viaOnly: { dependencyTypesNot: ['type-only'] } },
    },
    {
      name: 'resolvable',
      comment: 'A path that leads nowhere.',
      severity: 'error',
      from: { path: '^(server|shared|src|test)/' },
      to: { couldNotResolve: true },
    },
    {
      name: 'product-has-its-packages',
      comment: 'What runs in production stands under "dependencies".',
      severity: 'error',
      from: { path: '^(server|shared|src)/', pathNot: ['\\.spec\\.ts$', '^server/setup/'] },
      to: {
        dependencyTypes: ['npm-dev', 'npm-no-pkg', 'npm-unknown'],
        dependencyTypesNot: ['type-only'],
        pathNot: `${packages}@types/`,
      },
    },
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    exclude: { path: '\\.(svg|scss|html|json)$' },
    tsPreCompilationDeps: true,
    tsConfig: { fileName: 'test/tsconfig.json' },
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'require', 'node', 'default', 'types'],
      extensions: ['.ts', '.mts', '.js', '.mjs', '.cjs', '.json', '.d.ts'],
    },
  },
};
