import js from '@eslint/js';
import reactHooks from 'eslint-plugin-react-hooks';
import tseslint from 'typescript-eslint';

export default tseslint.config(
  { ignores: ['dist', 'data', 'coverage', 'node_modules', 'test-output', 'src/assets/public'] },
  js.configs.recommended,
  {
    files: ['**/*.{ts,tsx}'],
    extends: [...tseslint.configs.strictTypeChecked],
    languageOptions: {
      parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname },
    },
    rules: {
      // Numbers in text are what this product is made of.
      '@typescript-eslint/restrict-template-expressions': ['error', { allowNumber: true, allowBoolean: true }],
      '@typescript-eslint/consistent-type-imports': 'error',
      '@typescript-eslint/no-confusing-void-expression': ['error', { ignoreArrowShorthand: true }],
      // In hot loops over typed arrays an index inside the bounds needs no check.
      '@typescript-eslint/no-non-null-assertion': 'error',
      '@typescript-eslint/no-extraneous-class': 'off',
      // An index may lie outside: the types do not say so, and a check of it is not needless.
      '@typescript-eslint/no-unnecessary-condition': 'off',
      // Strings are compared by code point here; no text is taken apart for display.
      '@typescript-eslint/no-misused-spread': 'off',
      // Published coefficients stand with all the digits of their source.
      'no-loss-of-precision': 'off',
      '@typescript-eslint/restrict-plus-operands': 'error',
      eqeqeq: 'error',
    },
  },
  {
    files: ['shared/**/*.{ts,tsx}'],
    rules: {
      'no-restricted-globals': ['error', 'performance', 'process', 'window', 'document', 'crypto'],
      'no-restricted-properties': [
        'error',
        { object: 'Math', property: 'random', message: 'Randomness is an argument.' },
        { object: 'Date', property: 'now', message: 'The clock is an argument.' },
      ],
      'no-restricted-syntax': [
        'error',
        { selector: "NewExpression[callee.name='Date'][arguments.length=0]", message: 'The clock is an argument.' },
      ],
    },
  },
  {
    files: ['server/**/*.ts', 'server/**/*.tsx'],
    ignores: ['server/config.ts', 'server/main.ts', 'server/cli/**', 'server/database/cli-data-source.ts'],
    rules: {
      'no-restricted-properties': [
        'error',
        { object: 'process', property: 'env', message: 'Only server/config.ts reads the environment.' },
      ],
    },
  },
  {
    files: ['src/**/*.{ts,tsx}', 'shared/charts/**/*.tsx', 'tests/src/**/*.tsx'],
    plugins: { 'react-hooks': reactHooks },
    rules: reactHooks.configs.recommended.rules,
  },
  {
    // supertest's bodies and JSON fixtures are untyped.
    files: ['tests/**/*.{ts,tsx}'],
    rules: {
      '@typescript-eslint/no-unsafe-assignment': 'off',
      '@typescript-eslint/no-unsafe-member-access': 'off',
      '@typescript-eslint/no-unsafe-argument': 'off',
      '@typescript-eslint/no-unsafe-call': 'off',
      '@typescript-eslint/no-unsafe-return': 'off',
      '@typescript-eslint/no-non-null-assertion': 'off',
    },
  },
  {
    files: ['**/*.js'],
    languageOptions: { globals: { console: 'readonly', process: 'readonly' } },
  },
);
