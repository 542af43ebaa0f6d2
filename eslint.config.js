import js from '@eslint/js';
import svelte from 'eslint-plugin-svelte';
import globals from 'globals';
import ts from 'typescript-eslint';
import { floorRules } from './eslint-floors.js';
import svelteConfig from './svelte.config.js';

export default ts.config(
  {
    ignores: ['build/', '.svelte-kit/', 'data/', 'static/', 'test-results/', 'build-*/', 'playwright-report/']
  },
  js.configs.recommended,
  ...ts.configs.recommended,
  ...svelte.configs['flat/recommended'],
  { languageOptions: { globals: { ...globals.browser, ...globals.node } } },
  {
    files: ['**/*.svelte', '**/*.svelte.ts'],
    languageOptions: { parserOptions: { parser: ts.parser, extraFileExtensions: ['.svelte'], svelteConfig } }
  },
  {
    rules: {
      // TypeScript itself checks undefined names.
      'no-undef': 'off',
      eqeqeq: ['error', 'always', { null: 'ignore' }],
      'no-console': ['error'],
      '@typescript-eslint/no-explicit-any': 'error',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      // Links inside the application are plain paths; it is always served from the root.
      'svelte/no-navigation-without-resolve': 'off',
      'svelte/require-each-key': 'error'
    }
  },
  { files: ['tests/**', 'src/lib/server/cli/**', '*.js', '*.ts'], rules: { 'no-console': 'off' } },
  ...floorRules
);
