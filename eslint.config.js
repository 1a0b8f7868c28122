import angular from 'angular-eslint';
import tseslint from 'typescript-eslint';

/** Folder → what it may not import. The one table of the boundaries that DEVELOPERS.md draws. */
const packages = {express: ['express', 'express/*'], kysely: ['kysely', 'better-sqlite3']};
const boundaries = {
  shared: ['**/server/**', '**/src/**', ...packages.express, ...packages.kysely],
  src: ['**/server/**', ...packages.express, ...packages.kysely],
  'server/contract': [
    '**/routes/**',
    '**/services/**',
    '**/ledger/**',
    '**/accounts/**',
    '**/db/**',
    '**/http/**',
    '**/engine/**',
    ...packages.express,
    ...packages.kysely,
  ],
  'server/routes': ['**/db/**', ...packages.kysely],
  'server/services': ['**/routes/**', '**/http/**', ...packages.express, ...packages.kysely],
  'server/engine': [
    '**/routes/**',
    '**/services/**',
    '**/ledger/**',
    '**/accounts/**',
    '**/db/**',
    '**/http/**',
    ...packages.express,
    ...packages.kysely,
  ],
  'server/ledger': [
    '**/routes/**',
    '**/services/**',
    '**/engine/**',
    '**/http/**',
    '**/accounts/**',
    ...packages.express,
  ],
  'server/accounts': [
    '**/routes/**',
    '**/services/**',
    '**/engine/**',
    '**/http/**',
    ...packages.express,
  ],
  migrations: ['**/server/**', '**/src/**', '**/shared/**', ...packages.express],
};

const boundaryRules = Object.entries(boundaries).map(([folder, group]) => ({
  files: [`${folder}/**/*.ts`],
  rules: {
    '@typescript-eslint/no-restricted-imports': [
      'error',
      {
        patterns: [
          {group, message: `${folder} may not import this; see the boundaries in DEVELOPERS.md.`},
        ],
      },
    ],
  },
}));

export default tseslint.config(
  {
    ignores: [
      'dist/',
      'data/',
      'node_modules/',
      '.angular/',
      'coverage/',
      'shared/api.gen.ts',
      'server/http/public/',
      'server/engine/kernels/assembly/',
    ],
  },
  {
    files: ['**/*.ts'],
    extends: [...tseslint.configs.strictTypeChecked, ...tseslint.configs.stylisticTypeChecked],
    languageOptions: {parserOptions: {projectService: true, tsconfigRootDir: import.meta.dirname}},
    linterOptions: {reportUnusedDisableDirectives: 'error'},
    rules: {
      '@typescript-eslint/no-unused-vars': ['error', {argsIgnorePattern: '^_'}],
      '@typescript-eslint/restrict-template-expressions': ['error', {allowNumber: true}],
      '@typescript-eslint/prefer-nullish-coalescing': ['error', {ignorePrimitives: {string: true}}],
      '@typescript-eslint/no-unsafe-class-instance-assignment': 'off',
      '@typescript-eslint/explicit-module-boundary-types': 'off',
      '@typescript-eslint/no-confusing-void-expression': ['error', {ignoreArrowShorthand: true}],
      '@typescript-eslint/no-non-null-assertion': 'error',
      '@typescript-eslint/dot-notation': 'off',
      '@typescript-eslint/unbound-method': 'off',
      '@typescript-eslint/no-unnecessary-condition': 'off',
      '@typescript-eslint/prefer-literal-enum-member': 'off',
      '@typescript-eslint/no-extraneous-class': 'off',
      '@typescript-eslint/no-invalid-void-type': 'off',
      '@typescript-eslint/class-literal-property-style': 'off',
      // One that opens across turns of the event loop would swallow the ledger's own statements.
      'no-restricted-syntax': [
        'error',
        {
          selector: "CallExpression[callee.object.name='db'][callee.property.name='transaction']",
          message: 'Use driver.transaction(…).immediate(); see server/db/open.ts.',
        },
      ],
    },
  },
  {
    files: ['src/**/*.ts'],
    extends: [...angular.configs.tsRecommended],
    processor: angular.processInlineTemplates,
  },
  {
    files: ['src/**/*.html'],
    extends: [...angular.configs.templateRecommended, ...angular.configs.templateAccessibility],
  },
  ...boundaryRules,
);
