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
  toElectrons(
    counts: number,
    bad: number,
    electrons: number,
    usable: number,
    pixels: number,
    offset: number,
    perCount: number,
  ): void;
}

/** Makes an instance with a memory of its own. */
export type InstantiateSimd = () => SimdExports;
