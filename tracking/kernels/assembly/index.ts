// WebAssembly kernels, compiled by AssemblyScript. Each has a plain twin in TypeScript that is its oracle.
// Addresses are bytes in the module's memory; whoever calls lays out that memory and starts at `heapBase`.

export { sumBlocks } from './block-sums';
export { findPeaks } from './find-peaks';
export { elongateJointFit } from './joint-fit-elongation';
export { jointFitLikelihood, runJointFit } from './joint-fit';
export { jointFitSignificance } from './joint-fit-significance';
export { loadJointFitWindow } from './joint-fit-window';
export { clearSpots, paintSpot } from './joint-fit-paint';
export { peakOfResidual } from './joint-fit-residual';
export { setUpJointFit } from './joint-fit-set-up';
export { gatherLight, lightSums } from './light-sums';
export { mixRows } from './mix-rows';
export { scanPair } from './pair-scan';
export { respond } from './respond';

/** First byte that the module itself doesn't use. */
export function heapBase(): usize {
  return __heap_base;
}
