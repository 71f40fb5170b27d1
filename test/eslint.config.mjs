/**
 * What a line may say. What a file may import is the part of dependencies.cjs.
 */
import path from 'node:path';

import angular from 'angular-eslint';
import tseslint from 'typescript-eslint';

import noUntypedQuery from './eslint-rules/no-untyped-query.cjs';

const SERVER = ['server/**/*.ts'];
const CLIENT = ['src/**/*.ts'];
const DOMAIN = ['shared/domain/**/*.ts'];
const SPECS = ['test/**/*.ts', 'src/**/*.spec.ts'];

const NODE_GLOBALS = {
  AbortSignal: 'readonly',
  Buffer: 'readonly',
  URL: 'readonly',
  __dirname: 'readonly',
  console: 'readonly',
  fetch: 'readonly',
  module: 'writable',
  performance: 'readonly',
  process: 'readonly',
  require: 'readonly',
  setInterval: 'readonly',
  setTimeout: 'readonly',
  clearInterval: 'readonly',
  clearTimeout: 'readonly',
};

const TEST_WORDS = [
  'afterAll',
  'afterEach',
  'beforeAll',
  'beforeEach',
  'describe',
  'expect',
  'it',
  'jest',
  'test',
];

/** A focused test hides all others from the run. */
const FOCUSED_TESTS = [
  {
    selector:
      "CallExpression[callee.property.name='only'][callee.object.name=/^(it|test|describe)$/]",
    message: 'A focused test hides all others: take the .only away.',
  },
  {
    selector: 'CallExpression[callee.name=/^(fit|fdescribe|xit|xtest|xdescribe)$/]',
    message: 'Neither focused nor switched-off tests are committed.',
  },
];

/** ESLint's own recommended rules that TypeScript does not check itself. */
const CORE_RULES = Object.fromEntries(
  [
    'for-direction',
    'no-async-promise-executor',
    'no-case-declarations',
    'no-compare-neg-zero',
    'no-cond-assign',
    'no-constant-binary-expression',
    'no-constant-condition',
    'no-control-regex',
    'no-debugger',
    'no-dupe-else-if',
    'no-duplicate-case',
    'no-empty',
    'no-empty-character-class',
    'no-empty-pattern',
    'no-fallthrough',
    'no-irregular-whitespace',
    'no-loss-of-precision',
    'no-misleading-character-class',
    'no-prototype-builtins',
    'no-regex-spaces',
    'no-self-assign',
    'no-self-compare',
    'no-sparse-arrays',
    'no-unsafe-finally',
    'no-unsafe-optional-chaining',
    'no-unused-labels',
    'no-useless-backreference',
    'no-useless-catch',
    'no-useless-escape',
    'prefer-const',
    'use-isnan',
    'valid-typeof',
  ].map((rule) => [rule, 'error']),
);

export default tseslint.config(
  { ignores: ['dist/', 'node_modules/', '.angular/', '.data/', 'coverage/', 'tiles/'] },

  {
    files: ['**/*.mjs', '**/*.cjs'],
    languageOptions: { globals: NODE_GLOBALS },
    rules: {
      'no-undef': 'error',
      'no-unused-vars': ['error', { argsIgnorePattern: '^_', caughtErrors: 'none' }],
      ...CORE_RULES,
      eqeqeq: 'error',
    },
  },

  {
    files: ['**/*.ts'],
    extends: [...tseslint.configs.recommendedTypeChecked],
    plugins: { thawline: { rules: { 'no-untyped-query': noUntypedQuery } } },
    languageOptions: {
      parserOptions: {
        tsconfigRootDir: path.resolve(import.meta.dirname, '..'),
        // One program that holds everything: several would read the same files again and again.
        project: ['test/tsconfig.json'],
      },
    },
    rules: {
      ...CORE_RULES,
      eqeqeq: ['error', 'always', { null: 'ignore' }],
      '@typescript-eslint/consistent-type-imports': [
        'error',
        { fixStyle: 'inline-type-imports', disallowTypeAnnotations: false },
      ],
      '@typescript-eslint/no-explicit-any': 'error',
      // Express knows an error handler by its four arguments, used or not.
      '@typescript-eslint/no-unused-vars': [
        'error',
        { argsIgnorePattern: '^_', varsIgnorePattern: '^_', caughtErrors: 'none' },
      ],
      // A router's handlers are async; Express 5 takes their rejections.
      '@typescript-eslint/no-misused-promises': ['error', { checksVoidReturn: false }],
      '@typescript-eslint/restrict-template-expressions': [
        'error',
        { allowNumber: true, allowBoolean: true },
      ],
      // An async method without an await still keeps the promise of its interface.
      '@typescript-eslint/require-await': 'off',
      // Modules here are objects of plain functions; handing one on by name loses no `this`.
      '@typescript-eslint/unbound-method': 'off',
      'thawline/no-untyped-query': 'error',
    },
  },

  {
    files: DOMAIN,
    rules: {
      'no-restricted-properties': [
        'error',
        { object: 'Math', property: 'random', message: 'The domain has no dice: take a seed.' },
        { object: 'Date', property: 'now', message: 'The domain has no clock: take the time.' },
        {
          object: 'performance',
          property: 'now',
          message: 'The domain has no clock: take the time.',
        },
      ],
      'no-restricted-syntax': [
        'error',
        {
          selector: "NewExpression[callee.name='Date'][arguments.length=0]",
          message: 'The domain has no clock: take the time.',
        },
      ],
    },
  },

  {
    // The one program of types knows the words of tests everywhere.
    files: [...SERVER, 'shared/**/*.ts'],
    rules: { 'no-restricted-globals': ['error', ...TEST_WORDS] },
  },

  {
    files: SERVER,
    ignores: ['server/realtime/**', 'server/fakes/**'],
    rules: {
      'no-restricted-syntax': [
        'error',
        {
          selector:
            "CallExpression[callee.property.name='emit'][callee.object.type!='ThisExpression']",
          message: 'Only realtime/ emits; announce a change through it.',
        },
        {
          selector: "CallExpression[callee.property.name='transaction']",
          message: 'Only db/transaction.ts opens a transaction: use inTransaction.',
        },
      ],
    },
  },
  { files: ['server/db/*.ts'], rules: { 'no-restricted-syntax': 'off' } },

  {
    files: CLIENT,
    extends: [...angular.configs.tsRecommended],
    processor: angular.processInlineTemplates,
    rules: {
      '@angular-eslint/component-selector': [
        'error',
        { type: 'element', prefix: 'thaw', style: 'kebab-case' },
      ],
      '@angular-eslint/directive-selector': [
        'error',
        { type: 'attribute', prefix: 'thaw', style: 'camelCase' },
      ],
      '@angular-eslint/prefer-on-push-component-change-detection': 'error',
      // A component's name says which part of the screen it is, without a suffix.
      '@angular-eslint/component-class-suffix': 'off',
      '@angular-eslint/directive-class-suffix': 'off',
    },
  },
  {
    files: ['src/**/*.html'],
    extends: [...angular.configs.templateRecommended, ...angular.configs.templateAccessibility],
  },

  {
    files: SPECS,
    rules: {
      'no-restricted-syntax': ['error', ...FOCUSED_TESTS],
      // Replies of the server under test are read as they come; the expectation checks their shape.
      '@typescript-eslint/no-unsafe-assignment': 'off',
      '@typescript-eslint/no-unsafe-member-access': 'off',
      '@typescript-eslint/no-unsafe-argument': 'off',
      '@typescript-eslint/no-unsafe-call': 'off',
      '@typescript-eslint/no-unsafe-return': 'off',
      '@typescript-eslint/no-base-to-string': 'off',
      '@angular-eslint/prefer-on-push-component-change-detection': 'off',
    },
  },
);
