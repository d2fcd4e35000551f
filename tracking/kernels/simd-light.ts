import { levelOfSamples, lightStride, type LightLevel, type LightSums } from '../detection/light-level';
import type { Arena } from './arena';
import type { SimdExports } from './simd-exports';
import type { SimdPlanes } from './simd-planes';
import type { ElectronScale } from './noise-units';

/** Light level of the frame in an instance's memory, as `measureLightLevel` finds it. */
export function createSimdLight(
  simd: SimdExports,
  arena: Arena,
  at: SimdPlanes,
  pixels: number,
): (scale: ElectronScale, readVariance: number) => LightLevel {
  const samples = {
    count: 0,
    electrons: arena.floats(at.lightElectrons, at.lightMost),
    background: arena.floats(at.lightBackground, at.lightMost),
  };
  const { lightElectrons, lightBackground } = at;
  const found = arena.doubles(at.lightSums, 3);
  const sums: LightSums = (scale, shift, readVariance, clip) => {
    const { count } = samples;
    simd.lightSums(lightElectrons, lightBackground, count, scale, shift, readVariance, clip, at.lightSums);
    return { light: found[0], expected: found[1], kept: found[2] };
  };
  return ({ offset, perCount, saturationE }, readVariance) => {
    samples.count = simd.gatherLight(
      at.counts,
      at.bad,
      at.background,
      pixels,
      lightStride(pixels),
      offset,
      perCount,
      saturationE,
      lightElectrons,
      lightBackground,
    );
    return levelOfSamples(samples, readVariance, sums);
  };
}
