import js from '@eslint/js';
import reactHooks from 'eslint-plugin-react-hooks';
import globals from 'globals';
import tseslint from 'typescript-eslint';

export default tseslint.config(
  {
    ignores: [
      'dist/**',
      'dist.*/**',
      'node_modules/**',
      '.data/**',
      'coverage/**',
      'test-results/**',
      'playwright-report/**',
      // AssemblyScript: its own compiler checks it.
      'shared/statistics/simd/assembly/**',
    ],
  },
  { linterOptions: { reportUnusedDisableDirectives: 'error' } },
  js.configs.recommended,
  {
    files: ['**/*.{ts,tsx}'],
    extends: [tseslint.configs.strictTypeChecked],
    languageOptions: { parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname } },
    rules: {
      '@typescript-eslint/consistent-type-imports': ['error', { fixStyle: 'inline-type-imports' }],
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      '@typescript-eslint/switch-exhaustiveness-check': ['error', { considerDefaultExhaustiveForUnions: true }],
      '@typescript-eslint/restrict-template-expressions': ['error', { allowNumber: true, allowBoolean: true }],
      '@typescript-eslint/no-confusing-void-expression': ['error', { ignoreArrowShorthand: true }],
      '@typescript-eslint/no-misused-promises': [
        'error',
        { checksVoidReturn: { attributes: false, arguments: false } },
      ],
      // Contracts give literal types that the database may one day contradict; a check that the compiler thinks idle is allowed.
      '@typescript-eslint/no-unnecessary-condition': 'off',
      '@typescript-eslint/no-extraneous-class': 'off',
      // An interface may ask for a promise that one of its kinds doesn't need.
      '@typescript-eslint/require-await': 'off',
      '@typescript-eslint/no-meaningless-void-operator': 'off',
      // Hot loops index typed arrays whose bounds the loop already holds.
      '@typescript-eslint/no-non-null-assertion': 'off',
      '@typescript-eslint/prefer-for-of': 'off',
      eqeqeq: 'error',
      'no-empty-pattern': ['error', { allowObjectPatternsAsParameters: true }],
      'no-console': 'error',
    },
  },
  {
    files: ['src/**/*.{ts,tsx}'],
    extends: [reactHooks.configs.flat['recommended-latest']],
    languageOptions: { globals: globals.browser },
    // It warns what the React compiler would leave out; this build doesn't use that compiler.
    rules: { 'react-hooks/incompatible-library': 'off' },
  },
  { files: ['**/*.{js,mjs,cjs}'], languageOptions: { globals: globals.node } },
  { files: ['server/cli/**', 'seed-data/**', 'tests/setup/**', 'e2e/**'], rules: { 'no-console': 'off' } },
  {
    files: ['tests/**/*.{ts,tsx}', 'e2e/**/*.ts'],
    rules: {
      // Answers of the HTTP client are untyped, and a test looks into them as an outsider would.
      '@typescript-eslint/no-unsafe-assignment': 'off',
      '@typescript-eslint/no-unsafe-member-access': 'off',
      '@typescript-eslint/no-unsafe-argument': 'off',
      '@typescript-eslint/no-unsafe-return': 'off',
      '@typescript-eslint/no-unsafe-call': 'off',
      '@typescript-eslint/unbound-method': 'off',
      'no-restricted-syntax': [
        'error',
        {
          selector:
            'MemberExpression[object.name=/^(it|test|describe)$/][property.name=/^(skip|only|todo|fixme|skipIf|runIf)$/]',
          message: 'Every test runs.',
        },
      ],
    },
  },
);
