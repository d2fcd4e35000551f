import type { SimdMemory } from './simd-exports';

/** Vectors are 16 bytes; cache lines 64. */
const ALIGNMENT = 64;
const PAGE_BYTES = 65_536;
/** 32-bit addresses end here. */
const MEMORY_BYTES_MOST = 2 ** 32 - PAGE_BYTES;

/**
 * Lays out the memory of one instance: pieces are reserved first, then the memory grows once, because
 * growing detaches all views made before.
 */
export class Arena {
  private top: number;

  constructor(
    private readonly memory: SimdMemory,
    heapBase: number,
  ) {
    this.top = heapBase;
  }

  /** Address of a new piece, on a multiple of 64. */
  reserve(bytes: number): number {
    const at = Math.ceil(this.top / ALIGNMENT) * ALIGNMENT;
    this.top = at + bytes;
    return at;
  }

  /** Makes the memory as large as what was reserved; false when there isn't that much. */
  grow(): boolean {
    if (this.top > MEMORY_BYTES_MOST) return false;
    const missing = this.top - this.memory.buffer.byteLength;
    if (missing <= 0) return true;
    try {
      this.memory.grow(Math.ceil(missing / PAGE_BYTES));
      return true;
    } catch (cause) {
      if (cause instanceof RangeError) return false;
      throw cause;
    }
  }

  floats(at: number, length: number): Float32Array {
    return new Float32Array(this.memory.buffer, at, length);
  }

  doubles(at: number, length: number): Float64Array {
    return new Float64Array(this.memory.buffer, at, length);
  }

  integers(at: number, length: number): Int32Array {
    return new Int32Array(this.memory.buffer, at, length);
  }

  bytes(at: number, length: number): Uint8Array {
    return new Uint8Array(this.memory.buffer, at, length);
  }
}
