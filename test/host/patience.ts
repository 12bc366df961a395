/** Longest wait for a state, in milliseconds. It measures nothing: it ends what waits in vain, and is so long that a machine with ten
 *  times as much to do is in time. */
export const PATIENCE_MS = 120_000;

/** Longest time of a test or of what makes one ready, which waits for many states, in milliseconds. */
export const TEST_MS = 600_000;

/** For the configurations of tests in a browser: they ask again until it is so. */
export const patience = {
  testTimeout: TEST_MS,
  hookTimeout: TEST_MS,
  expect: { poll: { timeout: PATIENCE_MS } },
} as const;
