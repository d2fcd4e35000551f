/** Garbage that gathers beside what is in use before it is collected, MB and per cent: more would only fill memory. */
const YOUNG_MB = 4;
const OLD_GROWTH_PERCENT = 30;

/**
 * How the JavaScript engine of a computing process is started.
 *
 * @param heapMB most memory of objects; typed arrays have theirs beside it
 */
export const engineFlags = (heapMB: number): string[] => [
  `--max-old-space-size=${heapMB}`,
  `--max-semi-space-size=${YOUNG_MB}`,
  `--heap-growing-percent=${OLD_GROWTH_PERCENT}`,
  // A process that waits for its next recording would forget what it compiled.
  '--no-flush-bytecode',
  // Nor what its objects look like, which compiled code is given up along with.
  '--retain-maps-for-n-gc=1000000',
  '--expose-gc',
  '--enable-source-maps',
];
