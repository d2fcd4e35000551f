import type { LightLevel } from '../detection/light-level';
import { DARK_VARIANCE_E2 } from '../detection/second-look';
import { createSpotKernel, edgeCorrection } from '../detection/spot-kernel';
import { Arena } from './arena';
import type { FrameKernels, ImageSpec, Kernels, Peaks } from './kernels';
import { electronScale, electronsOf, type ElectronScale } from './noise-units';
import { plainKernels } from './plain-kernels';
import type { InstantiateSimd, SimdExports } from './simd-exports';
import { createSimdLight } from './simd-light';
import { createSimdPainter } from './simd-painter';
import { plainPairs } from './plain-pairs';
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
  const counts = arena.floats(at.counts, pixels);
  const bad = arena.bytes(at.bad, pixels);
  const background = arena.floats(at.background, pixels);
  const peaks: Peaks = { count: 0, at: arena.integers(at.peaks, at.peaksMost) };
  const paint = createSimdPainter(simd, arena, at.blockRows, at.paddedWidth, width, height);
  const lightOf = createSimdLight(simd, arena, at, pixels);
  let electrons: ElectronScale = { offset: 0, perCount: 1, saturationE: Infinity };
  let frameLight: LightLevel = { scale: 1, shift: 0 };

  const setFrame: FrameKernels['setFrame'] = (from, scale) => {
    electrons = electronScale(scale);
    counts.set(from);
  };

  const isUsable: FrameKernels['isUsable'] = (pixel) => {
    const e = electronsOf(counts[pixel], electrons);
    return bad[pixel] === 0 && e - e === 0 && e < electrons.saturationE;
  };

  const bareAt: FrameKernels['bareAt'] = (pixel) =>
    Math.max(0, frameLight.scale * background[pixel] + frameLight.shift);

  const respond: FrameKernels['respond'] = (light, readVariance) => {
    frameLight = light;
    simd.respond(
      at.facts,
      at.counts,
      at.bad,
      at.background,
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
      electrons.offset,
      electrons.perCount,
      electrons.saturationE,
      light.scale,
      light.shift,
      readVariance + DARK_VARIANCE_E2,
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
      factsAt: at.facts,
      countsAt: at.counts,
      badAt: at.bad,
      backgroundAt: at.background,
      spotLightAt: at.spotLight,
      paintedAt: at.painted,
      scratchAt: at.scratch,
    },
    plain: null,
    bad,
    background,
    response: arena.floats(at.response, pixels),
    bareAt,
    isUsable,
    paintBackground: (blocks, grid) => paint(blocks, grid, 0, at.background),
    setFrame,
    lightLevel: (readVariance) => lightOf(electrons, readVariance),
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
