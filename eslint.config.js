import tseslint from 'typescript-eslint'
import reactHooks from 'eslint-plugin-react-hooks'

export default tseslint.config(
  { ignores: ['.build/', '.data/', 'node_modules/', 'examples/', '.dependency-cruiser.cjs'] },
  ...tseslint.configs.recommended,
  {
    rules: {
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      '@typescript-eslint/consistent-type-imports': 'error',
      'no-console': ['error', { allow: ['error'] }],
    },
  },
  { files: ['server/cli.ts', 'server/cli/**', 'tests/**', '**/*.mjs'], rules: { 'no-console': 'off' } },
  { files: ['src/**/*.{ts,tsx}'], ...reactHooks.configs.flat['recommended'] },
)
