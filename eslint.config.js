import js from '@eslint/js'
import prettier from 'eslint-config-prettier'
import reactHooks from 'eslint-plugin-react-hooks'
import globals from 'globals'
import tseslint from 'typescript-eslint'

const bans = [
  { selector: 'JSXAttribute[name.name="dangerouslySetInnerHTML"]', message: 'Render text, not markup.' },
  {
    selector: 'MemberExpression[object.name="z"][property.name="coerce"]',
    message: "z.coerce reads '' as 0 and 'false' as true: parse the text yourself.",
  },
  {
    selector: 'CallExpression[callee.property.name="query"] > TemplateLiteral[expressions.length>0]',
    message: 'Pass values as parameters of the query.',
  },
]

export default tseslint.config(
  { ignores: ['node_modules', 'dist', 'data', 'coverage', 'test-results', '.cache'] },
  js.configs.recommended,
  ...tseslint.configs.recommended,
  {
    linterOptions: { reportUnusedDisableDirectives: 'error' },
    rules: {
      eqeqeq: ['error', 'always'],
      'no-eval': 'error',
      'no-new-func': 'error',
      'no-restricted-syntax': ['error', ...bans],
    },
  },
  {
    files: ['**/*.{ts,tsx}'],
    languageOptions: { parserOptions: { projectService: true, tsconfigRootDir: import.meta.dirname } },
    rules: {
      '@typescript-eslint/no-floating-promises': 'error',
      '@typescript-eslint/await-thenable': 'error',
      '@typescript-eslint/no-misused-promises': [
        'error',
        { checksVoidReturn: { arguments: false, attributes: false } },
      ],
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
    },
  },
  {
    files: ['client/**/*.{ts,tsx}'],
    plugins: { 'react-hooks': reactHooks },
    languageOptions: { globals: globals.browser },
    rules: { 'react-hooks/rules-of-hooks': 'error', 'react-hooks/exhaustive-deps': 'error' },
  },
  {
    files: ['shared/**/*.ts'],
    rules: {
      'no-restricted-imports': [
        'error',
        {
          patterns: [
            {
              group: ['react', 'react-*', 'express', 'typeorm', 'node:*', '#server/*', '#client/*'],
              message: 'shared/ runs in the browser and on the server: plain TypeScript only.',
            },
          ],
        },
      ],
    },
  },
  { files: ['**/*.{js,mjs}', 'vite.config.ts'], languageOptions: { globals: globals.node } },
  prettier,
)
