import { DARK_VARIANCE_E2 } from '../detection/second-look';
import { createSpotKernel, edgeCorrection } from '../detection/spot-kernel';
import { Arena } from './arena';
import type { FrameKernels, ImageSpec, Kernels, Peaks } from './kernels';
import { saturationElectrons } from './noise-units';
import { plainKernels } from './plain-kernels';
import type { InstantiateSimd } from './simd-exports';
import { createSimdLight } from './simd-light';
import { reservePlanes } from './simd-planes';

/**
 * Kernels compiled to WebAssembly. Images that an instance's memory (4 GB) can't hold are left to the
 * plain kernels.
 */
export function createSimdKernels(instantiate: InstantiateSimd): Kernels {
  return { name: 'simd', forImages: (spec) => simdImages(spec, instantiate) ?? plainKernels.forImages(spec) };
}

function simdImages(spec: ImageSpec, instantiate: InstantiateSimd): FrameKernels | null {
  const { width, height, spotSigmaPx, scratchBytes = 0 } = spec;
  const pixels = width * height;
  const kernel = createSpotKernel(spotSigmaPx);
  const { reach } = kernel;
  const simd = instantiate();
  const arena = new Arena(simd.memory, simd.heapBase());
  const at = reservePlanes(arena, width, height, reach, scratchBytes);
  if (!arena.grow()) return null;

  arena.floats(at.weights, reach + 1).set(kernel.weight);
  arena.floats(at.correctionX, width).set(edgeCorrection(kernel, width));
  const correctionY = edgeCorrection(kernel, height);
  const electrons = arena.floats(at.electrons, pixels);
  const response = arena.floats(at.response, pixels);
  const noise = arena.floats(at.noise, at.noiseLength);
  const rowBytes = 4 * at.paddedWidth;
  const band = arena.floats(at.band, at.paddedWidth * (at.bandRows + 2 * reach));
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
    const floor = readVariance + DARK_VARIANCE_E2;
    const weightX = at.weights;
    const noiseStart = at.noise + 4 * reach;

    /** Row `y` of the frame, in units of noise and correlated along x, into a row of the band. */
    const fetchRow = (y: number, place: number) => {
      if (y >= height) {
        band.fill(0, place * at.paddedWidth, (place + 1) * at.paddedWidth);
        return;
      }
      const from = y * width;
      simd.noiseRow(
        at.electrons + 4 * from,
        at.usable + from,
        at.background + 4 * from,
        at.bare + 4 * from,
        at.model + 4 * from,
        noiseStart,
        width,
        scale,
        shift,
        floor,
        saturationE,
      );
      // Behind the last pixel stands the beginning of the next row.
      noise.fill(0, reach + width, reach + Math.ceil(width / 4) * 4);
      simd.correlateRow(
        noiseStart,
        weightX,
        reach,
        at.correctionX,
        at.band + place * rowBytes,
        at.paddedWidth,
      );
    };

    // Row r of the band holds row top - reach + r of the frame. Above the frame there is nothing.
    band.fill(0, 0, reach * at.paddedWidth);
    for (let r = 0; r < reach; r++) fetchRow(r, reach + r);
    for (let top = 0; top < height; top += at.bandRows) {
      const rows = Math.min(at.bandRows, height - top);
      for (let r = 0; r < rows; r++) fetchRow(top + reach + r, 2 * reach + r);
      for (let r = 0; r < rows; r++) {
        simd.correlateColumns(
          at.band + (reach + r) * rowBytes,
          rowBytes,
          weightX,
          reach,
          correctionY[top + r],
          at.response + 4 * (top + r) * width,
          width,
        );
      }
      band.copyWithin(0, rows * at.paddedWidth, (rows + 2 * reach) * at.paddedWidth);
    }
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
    toElectrons,
    lightLevel: createSimdLight(simd, arena, at, pixels),
    respond,
    findPeaks,
  };
}
