// WebAssembly kernels, compiled by AssemblyScript. Each has a plain twin in TypeScript that is its oracle.
// Addresses are bytes in the module's memory; whoever calls lays out that memory and starts at `heapBase`.

export { correlateColumns, correlateRow } from './correlate';
export { findPeaks } from './find-peaks';
export { gatherLight, lightSums } from './light-sums';
export { noiseRow } from './noise-row';
export { toElectrons } from './to-electrons';

/** First byte that the module itself doesn't use. */
export function heapBase(): usize {
  return __heap_base;
}
