import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    include: ['tests/**/*.test.ts'],
    globalSetup: ['tests/build_once.ts'],
    setupFiles: ['tests/repeatable.ts'],
    testTimeout: 60_000,
    hookTimeout: 120_000,
    // Tests keep no state of their own, so that files may share what they load: half the processor time.
    isolate: false,
    // By itself it would leave one core to a watcher whom nobody runs.
    maxWorkers: '100%',
  },
});
