import { DARK_VARIANCE_E2 } from '../detection/second-look';
import { createSpotKernel, edgeCorrection } from '../detection/spot-kernel';
import { Arena } from './arena';
import type { FrameKernels, ImageSpec, Kernels, Peaks } from './kernels';
import { saturationElectrons } from './noise-units';
import { plainKernels } from './plain-kernels';
import type { InstantiateSimd, SimdExports } from './simd-exports';
import { createSimdBackground } from './simd-background';
import { createSimdLight } from './simd-light';
import { reservePlanes } from './simd-planes';

/**
 * Kernels compiled to WebAssembly. Images that an instance's memory can't hold (4 GB at most, less where
 * the system grants less) are left to the plain kernels.
 */
export function createSimdKernels(instantiate: InstantiateSimd): Kernels {
  return { name: 'simd', forImages: (spec) => simdImages(spec, instantiate) ?? plainKernels.forImages(spec) };
}

function simdImages(spec: ImageSpec, instantiate: InstantiateSimd): FrameKernels | null {
  const { width, height, spotSigmaPx, scratchBytes = 0 } = spec;
  const pixels = width * height;
  const kernel = createSpotKernel(spotSigmaPx);
  const { reach } = kernel;
  const simd = instanceOrNull(instantiate);
  if (!simd) return null;
  const arena = new Arena(simd.memory, simd.heapBase());
  const at = reservePlanes(arena, width, height, reach, scratchBytes);
  if (!arena.grow()) return null;

  arena.floats(at.weights, reach + 1).set(kernel.weight);
  arena.floats(at.correctionX, width).set(edgeCorrection(kernel, width));
  arena.floats(at.correctionY, height).set(edgeCorrection(kernel, height));
  const electrons = arena.floats(at.electrons, pixels);
  const response = arena.floats(at.response, pixels);
  const peaks: Peaks = { count: 0, at: arena.integers(at.peaks, at.peaksMost) };
  let saturationE = Infinity;

  const toElectrons: FrameKernels['toElectrons'] = (counts, scale) => {
    const { offsetCounts, perCount } = scale;
    saturationE = saturationElectrons(scale);
    response.set(counts);
    simd.toElectrons(
      at.response,
      at.bad,
      at.electrons,
      at.usable,
      pixels,
      offsetCounts,
      perCount,
      saturationE,
    );
  };

  const respond: FrameKernels['respond'] = ({ scale, shift }, readVariance) => {
    simd.respond(
      at.electrons,
      at.usable,
      at.background,
      at.bare,
      at.model,
      at.response,
      width,
      height,
      at.noise,
      at.band,
      at.bandRows,
      at.paddedWidth,
      at.weights,
      reach,
      at.correctionX,
      at.correctionY,
      scale,
      shift,
      readVariance + DARK_VARIANCE_E2,
      saturationE,
    );
  };

  const findPeaks = (level: number): Peaks => {
    peaks.count = simd.findPeaks(at.response, width, height, level, at.peaks);
    return peaks;
  };

  return {
    width,
    height,
    kernel,
    compiled: {
      exports: simd,
      electronsAt: at.electrons,
      usableAt: at.usable,
      bareAt: at.bare,
      modelAt: at.model,
      responseAt: at.response,
      scratchAt: at.scratch,
    },
    bad: arena.bytes(at.bad, pixels),
    background: arena.floats(at.background, pixels),
    electrons,
    usable: arena.bytes(at.usable, pixels),
    bare: arena.floats(at.bare, pixels),
    model: arena.floats(at.model, pixels),
    response,
    paintBackground: createSimdBackground(simd, arena, at, width, height),
    toElectrons,
    lightLevel: createSimdLight(simd, arena, at, pixels),
    respond,
    findPeaks,
  };
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
