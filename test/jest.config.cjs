/**
 * Three kinds of test: `domain` (rules and contracts, no I/O), `server` (real MariaDB, real sockets)
 * and `client` (components and stores in jsdom). Browser stories run in Playwright, not here.
 */
const path = require('node:path');

const root = path.resolve(__dirname, '..');
const swc = [
  '@swc/jest',
  {
    jsc: {
      parser: { syntax: 'typescript', decorators: true },
      target: 'es2022',
      transform: { useDefineForClassFields: false },
    },
    module: { type: 'commonjs' },
  },
];
/** What the build and the set-up leave behind is no part of the program. */
const modulePathIgnorePatterns = ['<rootDir>/.data/', '<rootDir>/dist/'];
/** For a test that hangs: a busy machine is no fault, so no honest test should come near it. */
const testTimeout = 120_000;
/**
 * Looked up once a module instead of at each use: jest hands every look at a global name through its
 * sandbox, which took a sixth of the time of the rules. No `Date`: fake timers replace it.
 */
const sandboxInjectedGlobals = [
  ...['Array', 'BigInt', 'Boolean', 'Error', 'Infinity', 'JSON', 'Map', 'Math', 'Number', 'Object'],
  ...['Promise', 'RegExp', 'Set', 'String', 'Symbol', 'WeakMap', 'parseFloat', 'parseInt'],
  ...['Float32Array', 'Float64Array', 'Int8Array', 'Int16Array', 'Int32Array'],
  ...['Uint8Array', 'Uint16Array', 'Uint32Array'],
];
const shared = { '^@shared/(.*)$': '<rootDir>/shared/$1' };

module.exports = {
  rootDir: root,
  maxWorkers: 2,
  testSequencer: '<rootDir>/test/sequencer.cjs',
  testTimeout,
  projects: [
    {
      displayName: 'domain',
      rootDir: root,
      modulePathIgnorePatterns,
      sandboxInjectedGlobals,
      testEnvironment: 'node',
      testMatch: ['<rootDir>/test/domain/**/*.spec.ts'],
      transform: { '^.+\\.[jt]s$': swc },
      moduleNameMapper: shared,
    },
    {
      displayName: 'server',
      rootDir: root,
      modulePathIgnorePatterns,
      sandboxInjectedGlobals,
      testEnvironment: 'node',
      testMatch: ['<rootDir>/test/server/**/*.spec.ts'],
      transform: { '^.+\\.[jt]s$': swc },
      // These ship as ES modules only; the rest of node_modules is left alone for speed.
      transformIgnorePatterns: [
        '/node_modules/(?!(@seriousme/openapi-schema-validator|pbf|geojson-vt|@maplibre/vt-pbf|@maplibre/geojson-vt|@mapbox/point-geometry|@mapbox/vector-tile|flatbush|flatqueue)/)',
      ],
      moduleNameMapper: shared,
    },
    {
      displayName: 'client',
      rootDir: root,
      modulePathIgnorePatterns,
      sandboxInjectedGlobals,
      preset: 'jest-preset-angular',
      testEnvironment: 'jsdom',
      testMatch: ['<rootDir>/src/**/*.spec.ts'],
      setupFilesAfterEnv: ['<rootDir>/test/client/setup.cjs'],
      transform: {
        '^.+\\.svg$': '<rootDir>/test/client/raw-text.cjs',
        '^.+\\.(ts|js|mjs|html)$': [
          'jest-preset-angular',
          {
            tsconfig: '<rootDir>/src/tsconfig.spec.json',
            stringifyContentPathRegex: '\\.html$',
          },
        ],
      },
      transformIgnorePatterns: ['node_modules/(?!.*\\.mjs$)'],
      moduleNameMapper: shared,
    },
  ],
};
