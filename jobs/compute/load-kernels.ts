import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { rootDir } from '@/lib/env';
import type { InstantiateSimd, SimdExports } from '@/tracking/kernels/simd-exports';

// Named through a variable so that a bundler doesn't follow the path.
const COMPILED = 'kernels.wasm';

/**
 * The compiled WebAssembly kernels, or null where they can't be used: not built, or a processor
 * without 128-bit vectors. Whoever gets null computes with the plain kernels.
 */
export function loadSimdKernels(path = join(rootDir(), 'dist', COMPILED)): InstantiateSimd | null {
  let code: Buffer<ArrayBuffer>;
  try {
    code = readFileSync(path);
  } catch {
    return null;
  }
  if (!WebAssembly.validate(code)) return null;
  const compiled = new WebAssembly.Module(code);
  return () => new WebAssembly.Instance(compiled, {}).exports as unknown as SimdExports;
}
