import {defineConfig} from 'vitest/config';

const common = {
  environment: 'node',
  testTimeout: 60_000,
  hookTimeout: 60_000,
  // What is polled for comes soon; on a machine that is busy it may take a little longer.
  expect: {poll: {timeout: 5000}},
} as const;

export default defineConfig({
  test: {
    projects: [
      {
        test: {
          ...common,
          name: 'server',
          include: ['tests/**/*.test.ts'],
          exclude: ['tests/browser/**'],
        },
      },
      {
        test: {
          ...common,
          name: 'browser',
          include: ['tests/browser/**/*.test.ts'],
          testTimeout: 180_000,
          hookTimeout: 180_000,
          fileParallelism: false,
          // A browser beside the service on two shared cores: one time-out is no finding, two are.
          retry: 1,
        },
      },
    ],
  },
});
