import type { ImageModel } from '@/tracking/types';

/** "BDIM" read as a little-endian number. */
const MAGIC = 0x4d494442;
const VERSION = 1;
/** Magic, version, width, height as 32-bit numbers; then six 64-bit floating point numbers. */
const HEAD_BYTES = 16;
const SCALARS = ['gainCountsPerE', 'offsetCounts', 'readNoiseE', 'spotSigmaPx', 'saturationCounts'] as const;
const BACKGROUND_AT = HEAD_BYTES + 8 * SCALARS.length;

/** An image model as bytes, little-endian: head, numbers, background (32-bit), bad pixels (a byte each). */
export function encodeImageModel(model: ImageModel): Uint8Array {
  const pixels = model.width * model.height;
  const bytes = new Uint8Array(BACKGROUND_AT + 5 * pixels);
  new Uint32Array(bytes.buffer, 0, 4).set([MAGIC, VERSION, model.width, model.height]);
  const view = new DataView(bytes.buffer);
  SCALARS.forEach((name, i) => view.setFloat64(HEAD_BYTES + 8 * i, model[name], true));
  new Float32Array(bytes.buffer, BACKGROUND_AT, pixels).set(model.backgroundE);
  bytes.set(model.badPixels, BACKGROUND_AT + 4 * pixels);
  return bytes;
}

/** @throws RangeError when the bytes are not an image model of this version, or cut. */
export function decodeImageModel(encoded: Uint8Array): ImageModel {
  if (encoded.length < BACKGROUND_AT)
    throw new RangeError(`An image model has more than ${encoded.length} bytes.`);
  // A copy of its own starts where 32-bit views may start.
  const bytes = new Uint8Array(encoded);
  const [magic, version, width, height] = new Uint32Array(bytes.buffer, 0, 4);
  if (magic !== MAGIC || version !== VERSION) {
    throw new RangeError(`Got image model ${magic} v${version} when expected ${MAGIC} v${VERSION}.`);
  }
  const pixels = width * height;
  if (bytes.length !== BACKGROUND_AT + 5 * pixels) {
    throw new RangeError(
      `Got ${bytes.length} bytes when a model of ${width} x ${height} has ${BACKGROUND_AT + 5 * pixels}.`,
    );
  }
  const view = new DataView(bytes.buffer);
  const scalars = Object.fromEntries(
    SCALARS.map((name, i) => [name, view.getFloat64(HEAD_BYTES + 8 * i, true)]),
  );
  return {
    width,
    height,
    ...(scalars as Pick<ImageModel, (typeof SCALARS)[number]>),
    backgroundE: new Float32Array(bytes.buffer, BACKGROUND_AT, pixels),
    badPixels: bytes.subarray(BACKGROUND_AT + 4 * pixels),
  };
}
