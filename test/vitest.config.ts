import { availableParallelism } from 'node:os';
import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    root: new URL('..', import.meta.url).pathname,
    include: ['test/**/*.test.ts'],
    globalSetup: ['test/support/build.ts'],
    // Files of one worker share what they import: loading it for each took half of the time.
    isolate: false,
    // Also on two cores, where vitest would use one.
    maxWorkers: Math.max(2, availableParallelism() - 1),
    // Slow cores compile WebAssembly and run interpreters side by side.
    testTimeout: 120_000,
    hookTimeout: 120_000,
  },
});
