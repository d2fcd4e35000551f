import type { SpotFitsOptions } from '../detection/plain-spot-fits';
import type { ResidualPeak, SpotFits } from '../detection/spot-fits';
import { JOINT_SPOTS_MOST } from '../detection/fit-work';
import { PEAK_AT, SHARED_ARRAYS, SHARED_BYTES, type JointFitRoom } from './joint-fit-memory';
import type { CompiledPlanes } from './kernels';
import type { SpotKernel } from '../detection/spot-kernel';

/**
 * Joint fits in the memory of compiled kernels: pixels in single precision, four at a time, equations in
 * double precision.
 *
 * @param room what was asked for as `scratchBytes` when the planes were made.
 */
export function createSimdSpotFits(
  planes: CompiledPlanes,
  kernel: SpotKernel,
  options: SpotFitsOptions,
  room: JointFitRoom,
): SpotFits {
  const { exports: simd, scratchAt: fit } = planes;
  const { buffer } = simd.memory;
  const tapsAt = simd.setUpJointFit(
    fit,
    planes.factsAt,
    planes.countsAt,
    planes.badAt,
    planes.backgroundAt,
    planes.spotLightAt,
    planes.paintedAt,
    options.width,
    options.height,
    options.reach,
    room.windowMost,
    kernel.reach,
    options.spotSigmaPx,
    options.readVariance,
    options.stepDonePx,
  );
  new Float32Array(buffer, tapsAt, kernel.reach + 1).set(kernel.weight);
  const shared = (name: (typeof SHARED_ARRAYS)[number]) =>
    new Float64Array(buffer, fit + SHARED_BYTES * SHARED_ARRAYS.indexOf(name), JOINT_SPOTS_MOST);
  const found = new Float64Array(buffer, fit + PEAK_AT, 4);
  shared('sigma').fill(options.spotSigmaPx);
  const peak: ResidualPeak = { response: 0, xPx: 0, yPx: 0, brightness: 0 };
  return {
    x: shared('x'),
    y: shared('y'),
    n: shared('n'),
    sx: shared('sx'),
    sy: shared('sy'),
    sn: shared('sn'),
    elongation: shared('elongation'),
    splitX: shared('splitX'),
    splitY: shared('splitY'),
    centreX: shared('centreX'),
    centreY: shared('centreY'),
    sigma: shared('sigma'),
    clear: () => simd.clearSpots(fit),
    paint: (xPx, yPx, brightness, sigmaPx) => simd.paintSpot(fit, xPx, yPx, brightness, sigmaPx),
    load: (count) => simd.loadJointFitWindow(fit, count),
    run: (count, offsetSpreadE) => simd.runJointFit(fit, count, offsetSpreadE) === 1,
    elongate: () => simd.elongateJointFit(fit),
    logLikelihood: () => simd.jointFitLikelihood(fit),
    significance: () => simd.jointFitSignificance(fit),
    look() {
      simd.peakOfResidual(fit, kernel.squares);
      peak.response = found[0];
      peak.xPx = found[1];
      peak.yPx = found[2];
      peak.brightness = found[3];
      return peak;
    },
  };
}
