/** Memory of a WebAssembly module; growing it detaches every view made before. */
export interface SimdMemory {
  readonly buffer: ArrayBuffer;
  grow(pages: number): number;
}

/** What the compiled kernels export. Addresses are bytes in `memory`; see `assembly/` for each function. */
export interface SimdExports {
  memory: SimdMemory;
  /** First byte that the module doesn't use itself. */
  heapBase(): number;
  mixRows(top: number, bottom: number, share: number, least: number, out: number, pixels: number): void;
  scanPair(
    first: number,
    second: number,
    level: number,
    width: number,
    height: number,
    shiftA: number,
    shiftB: number,
    alone: number,
    suspect: number,
    reachBins: number,
    sum: number,
    squares: number,
    excessA: number,
    excessB: number,
    quiet: number,
    quietSum: number,
    quietPairs: number,
    highest: number,
  ): void;
  sumBlocks(
    first: number,
    second: number,
    level: number,
    width: number,
    height: number,
    columns: number,
    rows: number,
    shiftA: number,
    shiftB: number,
    quiet: number,
    mask: number,
    maskWidth: number,
    out: number,
  ): void;
  respond(
    facts: number,
    counts: number,
    bad: number,
    background: number,
    response: number,
    width: number,
    height: number,
    noise: number,
    band: number,
    bandRows: number,
    paddedWidth: number,
    weights: number,
    reach: number,
    correctionX: number,
    correctionY: number,
    offset: number,
    perCount: number,
    saturation: number,
    scale: number,
    shift: number,
    floor: number,
    level: number,
    peaks: number,
  ): number;
  findPeaks(response: number, width: number, height: number, level: number, peaks: number): number;
  gatherLight(
    counts: number,
    bad: number,
    background: number,
    pixels: number,
    stride: number,
    offset: number,
    perCount: number,
    saturation: number,
    electronsOut: number,
    backgroundOut: number,
  ): number;
  lightSums(
    electrons: number,
    background: number,
    count: number,
    scale: number,
    shift: number,
    readVariance: number,
    clip: number,
    sums: number,
  ): void;
  setUpJointFit(
    fit: number,
    facts: number,
    counts: number,
    bad: number,
    background: number,
    spotLight: number,
    painted: number,
    imageWidth: number,
    imageHeight: number,
    reach: number,
    windowMost: number,
    tapReach: number,
    sigma: number,
    readVariance: number,
    stepDone: number,
  ): number;
  clearSpots(fit: number): void;
  paintSpot(fit: number, x: number, y: number, brightness: number, sigma: number): void;
  loadJointFitWindow(fit: number, count: number): void;
  runJointFit(fit: number, count: number, offsetSpread: number): number;
  elongateJointFit(fit: number): void;
  jointFitLikelihood(fit: number): number;
  jointFitSignificance(fit: number): number;
  peakOfResidual(fit: number, squares: number): void;
}

/** Makes an instance with a memory of its own. */
export type InstantiateSimd = () => SimdExports;
