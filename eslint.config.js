import js from '@eslint/js'
import prettier from 'eslint-config-prettier'
import vue from 'eslint-plugin-vue'
import globals from 'globals'
import typescript from 'typescript-eslint'
import bellpull from './eslint.rules.mjs'

const TESTS = ['**/*.test.ts', '**/*.spec.ts', 'apps/*/test/**', 'packages/*/test/**', 'e2e/**']
const TOOLS = ['apps/api/dev/**', 'apps/api/bench/**', '**/*.config.{ts,js}', '**/*.mjs']

const environment = {
  selector: 'MemberExpression[object.name="process"][property.name="env"]',
  message: 'The environment is read in platform/config.ts only.',
}
const clock = [
  {
    selector: 'NewExpression[callee.name="Date"][arguments.length=0]',
    message: 'Ask the clock of platform/clock.ts for the time.',
  },
  {
    selector: 'CallExpression[callee.object.name="Date"][callee.property.name="now"]',
    message: 'Ask the clock of platform/clock.ts for the time.',
  },
  {
    selector:
      'CallExpression[callee.object.name="DateTime"][callee.property.name=/^(now|utc|local)$/][arguments.length=0]',
    message: 'Ask the clock of platform/clock.ts for the time.',
  },
]
const request = ['fetch', 'XMLHttpRequest', 'EventSource'].flatMap((name) => [
  {
    selector: `CallExpression[callee.name="${name}"], NewExpression[callee.name="${name}"]`,
    message: 'Requests leave through api/http.ts only.',
  },
  {
    selector: `MemberExpression[object.name=/^(window|globalThis|self)$/][property.name="${name}"]`,
    message: 'Requests leave through api/http.ts only.',
  },
])
const processModule = {
  paths: ['node:process', 'process'].map((name) => ({
    name,
    message: 'The environment is read in platform/config.ts only.',
  })),
}

export default typescript.config(
  {
    ignores: [
      '**/dist/',
      '**/node_modules/',
      '.tools/',
      '.data/',
      'coverage/',
      '**/test-results/',
      '**/playwright-report/',
    ],
  },
  { linterOptions: { noInlineConfig: true, reportUnusedDisableDirectives: 'error' } },
  js.configs.recommended,
  ...typescript.configs.strict,
  ...vue.configs['flat/strongly-recommended'],
  prettier,
  {
    plugins: { bellpull },
    rules: {
      'bellpull/import-direction': 'error',
      'bellpull/no-cycle': 'error',
      '@typescript-eslint/consistent-type-imports': 'error',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', ignoreRestSiblings: true }],
      '@typescript-eslint/unified-signatures': 'off',
      // `noUncheckedIndexedAccess` is on: where the code has just seen that a value is there, `!` says so in place.
      '@typescript-eslint/no-non-null-assertion': 'off',
      eqeqeq: 'error',
      'max-lines': ['error', { max: 320 }],
      'no-console': 'error',
      'no-var': 'error',
      'object-shorthand': 'error',
      'prefer-const': 'error',
    },
  },
  { files: ['**/*.vue'], languageOptions: { parserOptions: { parser: typescript.parser } } },
  {
    files: ['apps/web/src/**'],
    languageOptions: { globals: globals.browser },
    rules: {
      'vue/block-lang': ['error', { script: { lang: 'ts' } }],
      'vue/block-order': ['error', { order: ['script', 'template', 'style'] }],
      'vue/component-api-style': ['error', ['script-setup']],
      'vue/define-macros-order': 'error',
      'vue/no-v-html': 'error',
      'vue/no-unused-refs': 'error',
      'no-restricted-syntax': ['error', environment, ...request],
    },
  },
  {
    files: ['apps/web/src/**/*View.vue', 'apps/web/src/App.vue'],
    rules: { 'vue/multi-word-component-names': 'off' },
  },
  {
    files: ['packages/*/src/**'],
    rules: {
      'no-restricted-imports': ['error', processModule],
      'no-restricted-syntax': ['error', environment, ...clock],
    },
  },
  {
    files: ['apps/api/src/**'],
    languageOptions: { globals: globals.node },
    rules: {
      'no-restricted-imports': ['error', processModule],
      'no-restricted-syntax': ['error', environment, ...clock],
      '@typescript-eslint/no-extraneous-class': 'off',
    },
  },
  { files: ['apps/api/src/platform/config.ts'], rules: { 'no-restricted-syntax': ['error', ...clock] } },
  { files: ['apps/api/src/platform/clock.ts'], rules: { 'no-restricted-syntax': ['error', environment] } },
  { files: ['apps/web/src/api/http.ts'], rules: { 'no-restricted-syntax': ['error', environment] } },
  // Scanners send group separators and other control characters.
  { files: ['packages/domain/src/label/**'], rules: { 'no-control-regex': 'off' } },
  // Programs that a person starts by hand speak on the terminal.
  { files: ['apps/api/src/migrate.ts', 'apps/api/src/demo/**'], rules: { 'no-console': 'off' } },
  {
    files: [...TESTS, ...TOOLS],
    languageOptions: { globals: { ...globals.node, ...globals.browser } },
    rules: {
      'no-console': 'off',
      'no-restricted-imports': 'off',
      'no-restricted-syntax': 'off',
    },
  },
  // Playwright reads from the empty pattern that a fixture needs nothing.
  { files: ['e2e/**'], rules: { 'no-empty-pattern': ['error', { allowObjectPatternsAsParameters: true }] } },
  { files: TESTS, rules: { 'max-lines': ['error', { max: 420 }] } },
)
