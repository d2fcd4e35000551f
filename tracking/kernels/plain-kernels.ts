import { measureLightLevel } from '../detection/light-level';
import { createMatchedFilter, findPeaks } from '../detection/matched-filter';
import { DARK_VARIANCE_E2 } from '../detection/second-look';
import { paintBlocks, raiseToZero } from '../image-model/block-grid';
import type { FrameKernels, ImageSpec, Kernels, Peaks } from './kernels';
import { electronScale, electronsOf } from './noise-units';
import { plainPairs } from './plain-pairs';

/** The kernels in plain TypeScript: oracle of the compiled ones, and what computes where those can't run. */
export const plainKernels: Kernels = { name: 'plain', forImages, forPairs: plainPairs };

function forImages({ width, height, spotSigmaPx }: ImageSpec): FrameKernels {
  const pixels = width * height;
  const bad = new Uint8Array(pixels);
  const background = new Float32Array(pixels);
  const electrons = new Float32Array(pixels);
  const usable = new Uint8Array(pixels);
  const bare = new Float32Array(pixels);
  const model = new Float32Array(pixels);
  const noise = new Float32Array(pixels);
  const response = new Float32Array(pixels);
  const filter = createMatchedFilter(width, height, spotSigmaPx);
  const peaks: Peaks = { count: 0, at: new Int32Array(1024) };
  let saturationE = Infinity;

  const paintBackground: FrameKernels['paintBackground'] = (blocks, { columns, rows }) => {
    paintBlocks(blocks, { width, height, columns, rows }, background);
    raiseToZero(background);
  };

  const setFrame: FrameKernels['setFrame'] = (counts, countScale) => {
    const scale = electronScale(countScale);
    saturationE = scale.saturationE;
    for (let i = 0; i < pixels; i++) {
      const e = electronsOf(counts[i], scale);
      const good = bad[i] === 0 && e - e === 0;
      electrons[i] = good ? e : 0;
      // A saturated pixel shows that there is light, but not how much.
      usable[i] = good && e < saturationE ? 1 : 0;
    }
  };

  const respond: FrameKernels['respond'] = ({ scale, shift }, readVariance) => {
    const floor = readVariance + DARK_VARIANCE_E2;
    for (let i = 0; i < pixels; i++) {
      const light = Math.max(0, scale * background[i] + shift);
      bare[i] = light;
      const seen = usable[i] === 1 || electrons[i] >= saturationE;
      noise[i] = seen ? (electrons[i] - light) / Math.sqrt(light + floor) : 0;
    }
    filter.apply(noise, response);
  };

  const find = (level: number): Peaks => {
    findPeaks(response, width, height, level, peaks);
    return peaks;
  };

  return {
    width,
    height,
    kernel: filter.kernel,
    compiled: null,
    plain: { electrons, usable, bare, model },
    bad,
    background,
    response,
    bareAt: (pixel) => bare[pixel],
    isUsable: (pixel) => usable[pixel] === 1,
    paintBackground,
    setFrame,
    lightLevel: (readVariance) => measureLightLevel(electrons, background, usable, readVariance),
    respond,
    findPeaks: find,
  };
}
