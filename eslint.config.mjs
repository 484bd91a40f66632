import next from 'eslint-config-next/core-web-vitals';
import tseslint from 'typescript-eslint';
import { noCycle } from './lib/build/import-graph.mjs';

const root = import.meta.dirname;
const SOURCES = ['**/*.ts', '**/*.tsx'];
const MAX_LINES = 400;

/** Numbers, words and shapes without a side effect: fit for the browser, the server and the worker alike. */
const PURE = ['lib/units.ts', 'lib/point-roles.ts', 'lib/hydronics', 'lib/trends', 'lib/schemas'];

/** Which room may import what of ours (packages are open to all). DEVELOPERS.md says what lives where. */
const ROOMS = {
  app: ['app', 'components', 'lib'],
  components: ['components', 'lib/client', ...PURE],
  entities: ['entities', 'lib/schemas'],
  migrations: ['migrations'],
  jobs: ['jobs', 'lib', 'entities', 'fixtures'],
  fixtures: ['fixtures', ...PURE],
  lib: ['lib', 'entities', 'migrations'],
  'lib/hydronics': ['lib/hydronics', 'lib/units.ts', 'lib/point-roles.ts'],
  'lib/trends': ['lib/trends', 'lib/units.ts', 'lib/point-roles.ts'],
  'lib/schemas': PURE,
  'lib/client': ['lib/client', ...PURE],
};

const zones = Object.entries(ROOMS).map(([room, allowed]) => ({
  target: `./${room}`,
  from: '.',
  except: ['node_modules', ...allowed].map((each) => `./${each}`),
  message: `${room}/ may import only ${allowed.join(', ')} and packages.`,
}));

/** A setting made for the connection rather than the transaction leaks one tenant's rows to the next borrower of it. */
const TENANT_LEAK = 'A tenant setting lives in the transaction: set_config(name, value, true), through withTenant.';
const tenantLeaks = [
  ':matches(Literal[value=/set_config\\s*\\([^;]*,\\s*false\\s*\\)/i], TemplateElement[value.raw=/set_config\\s*\\([^;]*,\\s*false\\s*\\)/i])',
  'TemplateLiteral:has(TemplateElement[value.raw=/set_config/i]):has(TemplateElement[value.raw=/^\\s*,\\s*false\\s*\\)/i])',
  ':matches(Literal[value=/\\bset\\s+(session\\s+)?app\\./i], TemplateElement[value.raw=/\\bset\\s+(session\\s+)?app\\./i])',
].map((selector) => ({ selector, message: TENANT_LEAK }));

const config = tseslint.config(
  {
    ignores: ['.next', 'dist', '.slackwater', 'coverage', 'test-results', 'playwright-report', 'next-env.d.ts'].map(
      (name) => `**/${name}`,
    ),
  },
  // A rule that is wrong is changed here for everyone, with its reason; comments in files switch nothing off.
  {
    linterOptions: { noInlineConfig: true },
    plugins: { slackwater: { rules: { 'no-cycle': noCycle } }, import: next[0].plugins.import },
    settings: next[0].settings,
  },
  ...next.map((each) =>
    'rules' in each ? { ...each, files: ['app/**', 'components/**', 'lib/client/**', 'lib/mail/**'] } : each,
  ),
  {
    files: SOURCES,
    extends: [tseslint.configs.strictTypeChecked],
    languageOptions: { parserOptions: { projectService: true, tsconfigRootDir: root } },
    rules: {
      'import/no-restricted-paths': ['error', { basePath: root, zones }],
      'slackwater/no-cycle': ['error', { root }],
      'no-restricted-syntax': ['error', ...tenantLeaks],
      'no-console': 'error',
      'max-lines': ['error', MAX_LINES],
      '@typescript-eslint/restrict-template-expressions': ['error', { allowNumber: true }],
      '@typescript-eslint/no-confusing-void-expression': [
        'error',
        { ignoreArrowShorthand: true, ignoreVoidReturningFunctions: true },
      ],
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      // A handler that may or may not be asynchronous answers `void | Promise<void>`, and one that must be need not wait.
      '@typescript-eslint/no-invalid-void-type': 'off',
      '@typescript-eslint/require-await': 'off',
      // JSON merge patches (RFC 7396) delete by name.
      '@typescript-eslint/no-dynamic-delete': 'off',
      // Refuses what a class's own factory returns.
      '@typescript-eslint/no-unsafe-class-instance-assignment': 'off',
      // Naming a default says which one is meant.
      '@typescript-eslint/no-unnecessary-type-arguments': 'off',
    },
  },
  {
    // Loops over typed arrays are bounded by the array's own length, and a check per element would cost what the arrays save.
    files: ['lib/hydronics/**', 'lib/trends/**', 'fixtures/**', 'tests/**'],
    rules: { '@typescript-eslint/no-non-null-assertion': 'off' },
  },
  {
    files: ['components/**', 'entities/**', 'fixtures/**', 'jobs/**', 'lib/**', 'migrations/**'],
    rules: { 'import/no-default-export': 'error' },
  },
  {
    // Pages render on the server, once a request, where the time of the request is a fair input.
    files: ['app/**'],
    rules: { 'react-hooks/purity': 'off' },
  },
  {
    // Holds the very texts that the rule refuses.
    files: ['tests/lint/**'],
    rules: { 'no-restricted-syntax': 'off' },
  },
  {
    // Programs of their own speak to a terminal.
    files: ['jobs/{worker,migrate,load-demo}.ts', 'lib/build/**', 'fixtures/write-*.ts', 'tests/bench/**'],
    rules: { 'no-console': 'off' },
  },
);

export default config;
