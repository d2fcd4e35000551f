import { describe, expect, test } from 'vitest';
import { decodeImageModel, encodeImageModel } from '@/jobs/compute/encode-image-model';
import type { ImageModel } from '@/tracking/types';

const STEADY: ImageModel = {
  width: 5,
  height: 3,
  gainCountsPerE: 2.25,
  offsetCounts: 99.5,
  readNoiseE: 1.3,
  spotSigmaPx: 1.1,
  spotSigmaSpreadPx: 0.05,
  saturationCounts: Infinity,
  badPixels: Uint8Array.from({ length: 15 }, (_, i) => (i === 7 ? 1 : 0)),
  backgroundE: Float32Array.from({ length: 15 }, (_, i) => i / 3),
  backgroundDrift: null,
};
const DRIFTING: ImageModel = {
  ...STEADY,
  backgroundDrift: {
    columns: 2,
    rows: 1,
    nodeFrames: Float64Array.of(0.5, 49.5, 98.5),
    blocksE: Float32Array.of(1, 2, 3, 4, 5, 6),
  },
};

describe('an image model as bytes', () => {
  test.each([
    ['steady', STEADY],
    ['drifting', DRIFTING],
  ])('comes back the same: %s', (_, model) => {
    // One byte further in, as a view of a larger message may start.
    const message = new Uint8Array(encodeImageModel(model).length + 1);
    message.set(encodeImageModel(model), 1);
    expect(decodeImageModel(message.subarray(1))).toEqual(model);
  });

  test('without a measured spread of sizes has none afterwards', () => {
    expect(decodeImageModel(encodeImageModel({ ...STEADY, spotSigmaSpreadPx: undefined }))).toEqual({
      ...STEADY,
      spotSigmaSpreadPx: Number.NaN,
    });
  });

  test('is refused when cut or when it is something else', () => {
    const bytes = encodeImageModel(DRIFTING);
    expect(() => decodeImageModel(bytes.subarray(0, bytes.length - 1))).toThrow('has');
    expect(() => decodeImageModel(bytes.subarray(0, 20))).toThrow('has more than 20 bytes');
    expect(() => decodeImageModel(new Uint8Array(bytes.length))).toThrow('Got image model 0 v0');
  });
});
