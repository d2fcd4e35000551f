import nextVitals from 'eslint-config-next/core-web-vitals';
import nextTs from 'eslint-config-next/typescript';

const clientOnlyInComponents = {
  selector: "Program > ExpressionStatement[directive='use client']",
  message: "'use client' lives in components/ (and in error.tsx) so that one rule sees every browser file.",
};

const config = [
  {
    ignores: [
      '.next/**',
      'dist/**',
      '.beadline/**',
      'next-env.d.ts',
      '.dependency-cruiser.cjs',
      // Another language that looks like TypeScript.
      'tracking/kernels/assembly/**',
    ],
  },
  ...nextVitals,
  ...nextTs,
  {
    rules: {
      '@typescript-eslint/no-explicit-any': 'error',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
    },
  },
  {
    files: ['app/**/*.{ts,tsx}'],
    ignores: ['app/**/error.tsx', 'app/global-error.tsx'],
    rules: { 'no-restricted-syntax': ['error', clientOnlyInComponents] },
  },
  {
    // Kernels are pure: no clock, no chance, no input or output.
    files: ['tracking/**/*.ts'],
    rules: {
      'no-restricted-globals': [
        'error',
        'console',
        'process',
        'fetch',
        'setTimeout',
        'setInterval',
        'performance',
      ],
      'no-restricted-properties': [
        'error',
        { object: 'Math', property: 'random', message: 'Pass a seeded generator in.' },
        { object: 'Date', property: 'now', message: 'Pass times in.' },
      ],
      'no-restricted-syntax': [
        'error',
        { selector: 'ImportExpression', message: 'Kernels import statically.' },
        { selector: 'AwaitExpression', message: 'Kernels are synchronous.' },
        { selector: "NewExpression[callee.name='Date']", message: 'Pass times in.' },
      ],
    },
  },
];

export default config;
