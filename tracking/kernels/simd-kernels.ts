import { createSpotKernel } from '../detection/spot-kernel';
import { Arena } from './arena';
import type { FrameKernels, ImageSpec, Kernels } from './kernels';
import { plainKernels } from './plain-kernels';
import type { InstantiateSimd, SimdExports } from './simd-exports';
import { plainPairs } from './plain-pairs';
import { SimdFrame } from './simd-frame';
import { simdPairs } from './simd-pairs';
import { reservePlanes } from './simd-planes';

/**
 * Kernels compiled to WebAssembly. Images that an instance's memory can't hold (4 GB at most, less where
 * the system grants less) are left to the plain kernels.
 */
export function createSimdKernels(instantiate: InstantiateSimd): Kernels {
  return {
    name: 'simd',
    forImages: (spec) => simdImages(spec, instantiate) ?? plainKernels.forImages(spec),
    forPairs: (width, height) => {
      const simd = instanceOrNull(instantiate);
      return (simd && simdPairs(simd, width, height)) ?? plainPairs(width, height);
    },
  };
}

function simdImages(spec: ImageSpec, instantiate: InstantiateSimd): FrameKernels | null {
  const simd = instanceOrNull(instantiate);
  if (!simd) return null;
  const kernel = createSpotKernel(spec.spotSigmaPx);
  const arena = new Arena(simd.memory, simd.heapBase());
  const at = reservePlanes(arena, spec.width, spec.height, kernel.reach, spec.scratchBytes ?? 0);
  return arena.grow() ? new SimdFrame(simd, arena, at, kernel, spec) : null;
}

/** Null where the system has no room for one more: engines set aside much more than an instance asks for. */
function instanceOrNull(instantiate: InstantiateSimd): SimdExports | null {
  try {
    return instantiate();
  } catch (cause) {
    if (cause instanceof RangeError) return null;
    throw cause;
  }
}
