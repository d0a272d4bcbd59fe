import { builtinModules } from 'node:module';
import { defineConfig } from 'eslint/config';
import tseslint from 'typescript-eslint';

// Whatever decides a result is the same on every machine: engines differ in these, clocks and locales always do.
const unsteady = [
  { object: 'Math', property: 'pow', message: 'Engines differ: multiply.' },
  { object: 'Math', property: 'hypot', message: 'Engines differ: Math.sqrt of the sum of squares.' },
  { object: 'Math', property: 'random', message: 'Take a seeded generator of core/ as an argument.' },
  ...['localeCompare', 'toLocaleString', 'toLocaleLowerCase', 'toLocaleUpperCase', 'toLocaleDateString'].map(
    (property) => ({ property, message: 'Depends on the locale: compare or write by code unit.' }),
  ),
  ...['process', 'console', 'Buffer', 'Date', 'Intl', 'performance', 'setTimeout'].map((property) => ({
    object: 'globalThis',
    property,
    message: 'Only cli/ may.',
  })),
];
const machineGlobals = [
  ...['Date', 'Intl', 'performance', 'crypto'].map((name) => ({
    name,
    message: 'A result depends on its input alone.',
  })),
  ...[
    'console',
    'process',
    'Buffer',
    'global',
    'require',
    'module',
    '__dirname',
    '__filename',
    'setTimeout',
    'setInterval',
    'setImmediate',
    'clearTimeout',
    'clearInterval',
    'clearImmediate',
  ].map((name) => ({ name, message: 'Only cli/ may.' })),
];
const nodeModules = [...builtinModules, ...builtinModules.map((name) => `node:${name}`)];

const powers = ['BinaryExpression', 'AssignmentExpression'].map((node) => ({
  selector: `${node}[operator=/^\\*\\*=?$/]`,
  message: 'Engines differ in powers: multiply.',
}));
const machineTypes = [
  'TSTypeReference[typeName.name=/^(Buffer|Date)$/]',
  'TSQualifiedName[left.name=/^(NodeJS|Intl)$/]',
].map((selector) => ({ selector, message: 'Only cli/ may.' }));
const defaultExports = [
  { selector: 'ExportDefaultDeclaration', message: 'Export by name.' },
  { selector: "ExportSpecifier[exported.name='default']", message: 'Export by name.' },
];
const unfinishedTests = [
  {
    selector:
      'CallExpression[callee.name=/^(it|test|describe)$/] > ObjectExpression > Property[key.name=/^(skip|only|todo|fails)$/]',
    message: 'Every test runs, always.',
  },
  {
    selector:
      'MemberExpression[object.name=/^(it|test|describe)$/][property.name=/^(skip|only|todo|skipIf|runIf|fails)$/]',
    message: 'Every test runs, always.',
  },
  {
    selector: 'CallExpression[callee.name=/^(xit|xtest|xdescribe|fit|fdescribe)$/]',
    message: 'Every test runs, always.',
  },
];

export default defineConfig(
  { ignores: ['dist/', 'out/', 'coverage/', 'test/fixtures/', 'test/golden/'] },
  { linterOptions: { reportUnusedDisableDirectives: 'error' } },
  {
    files: ['**/*.ts'],
    extends: [tseslint.configs.recommendedTypeChecked],
    languageOptions: { parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname } },
    rules: {
      eqeqeq: 'error',
      'no-var': 'error',
      '@typescript-eslint/no-import-type-side-effects': 'error',
      'prefer-const': 'error',
      '@typescript-eslint/consistent-type-imports': ['error', { fixStyle: 'separate-type-imports' }],
      '@typescript-eslint/switch-exhaustiveness-check': ['error', { considerDefaultExhaustiveForUnions: true }],
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
    },
  },
  { files: ['src/**/*.ts'], rules: { 'no-restricted-syntax': ['error', ...defaultExports] } },
  {
    files: ['src/**/*.ts'],
    ignores: ['src/cli/**'],
    rules: {
      'no-restricted-syntax': ['error', ...defaultExports, ...powers, ...machineTypes],
      'no-restricted-properties': ['error', ...unsteady],
      'no-restricted-globals': ['error', ...machineGlobals],
      'no-restricted-imports': ['error', { paths: nodeModules.map((name) => ({ name, message: 'Only cli/ may.' })) }],
    },
  },
  {
    files: ['test/**/*.ts'],
    rules: {
      'no-restricted-syntax': ['error', ...unfinishedTests],
      // Tests look into parsed JSON and into packages without types: what is wrong there fails as a test.
      '@typescript-eslint/no-unsafe-assignment': 'off',
      '@typescript-eslint/no-unsafe-member-access': 'off',
      '@typescript-eslint/no-unsafe-argument': 'off',
      '@typescript-eslint/no-unsafe-call': 'off',
      '@typescript-eslint/no-unsafe-return': 'off',
    },
  },
);
