import type { BackgroundDrift, ImageModel } from '@/tracking/types';

/** "BDIM" read as a little-endian number. */
const MAGIC = 0x4d494442;
const VERSION = 2;
/** Magic, version, width, height, then columns, rows and nodes of the background's drift (0 without one), 0. */
const HEAD_NUMBERS = 8;
const HEAD_BYTES = 4 * HEAD_NUMBERS;
const SCALARS = [
  'gainCountsPerE',
  'offsetCounts',
  'readNoiseE',
  'spotSigmaPx',
  'spotSigmaSpreadPx',
  'saturationCounts',
] as const;
const NODES_AT = HEAD_BYTES + 8 * SCALARS.length;

/** Where the parts of a model begin, and its length, bytes. */
function layout(width: number, height: number, columns: number, rows: number, nodes: number) {
  const backgroundAt = NODES_AT + 8 * nodes;
  const blocksAt = backgroundAt + 4 * width * height;
  const badAt = blocksAt + 4 * columns * rows * nodes;
  return { backgroundAt, blocksAt, badAt, length: badAt + width * height };
}

/**
 * An image model as bytes, little-endian: head (32-bit), numbers (64-bit), frames at which the
 * background's drift is known (64-bit), background and its drift (32-bit), bad pixels (a byte each).
 */
export function encodeImageModel(model: ImageModel): Uint8Array {
  const { width, height, backgroundDrift: drift } = model;
  const nodes = drift?.nodeFrames.length ?? 0;
  const [columns, rows] = drift ? [drift.columns, drift.rows] : [0, 0];
  const { backgroundAt, blocksAt, badAt, length } = layout(width, height, columns, rows, nodes);
  const bytes = new Uint8Array(length);
  new Uint32Array(bytes.buffer, 0, HEAD_NUMBERS).set([MAGIC, VERSION, width, height, columns, rows, nodes]);
  new Float64Array(bytes.buffer, HEAD_BYTES, SCALARS.length).set(
    SCALARS.map((name) => model[name] ?? Number.NaN),
  );
  new Float32Array(bytes.buffer, backgroundAt, width * height).set(model.backgroundE);
  if (drift) {
    new Float64Array(bytes.buffer, NODES_AT, nodes).set(drift.nodeFrames);
    new Float32Array(bytes.buffer, blocksAt, drift.blocksE.length).set(drift.blocksE);
  }
  bytes.set(model.badPixels, badAt);
  return bytes;
}

/** @throws RangeError when the bytes are not an image model of this version, or cut. */
export function decodeImageModel(encoded: Uint8Array): ImageModel {
  if (encoded.length < NODES_AT)
    throw new RangeError(`An image model has more than ${encoded.length} bytes.`);
  // A copy of its own starts where 64-bit views may start.
  const bytes = new Uint8Array(encoded);
  const [magic, version, width, height, columns, rows, nodes] = new Uint32Array(
    bytes.buffer,
    0,
    HEAD_NUMBERS,
  );
  if (magic !== MAGIC || version !== VERSION) {
    throw new RangeError(`Got image model ${magic} v${version} when expected ${MAGIC} v${VERSION}.`);
  }
  const { backgroundAt, blocksAt, badAt, length } = layout(width, height, columns, rows, nodes);
  if (bytes.length !== length) {
    throw new RangeError(`Got ${bytes.length} bytes when a model of ${width} x ${height} has ${length}.`);
  }
  const values = new Float64Array(bytes.buffer, HEAD_BYTES, SCALARS.length);
  const scalars = Object.fromEntries(SCALARS.map((name, i) => [name, values[i]]));
  const backgroundDrift: BackgroundDrift | null =
    nodes === 0
      ? null
      : {
          columns,
          rows,
          nodeFrames: new Float64Array(bytes.buffer, NODES_AT, nodes),
          blocksE: new Float32Array(bytes.buffer, blocksAt, columns * rows * nodes),
        };
  return {
    width,
    height,
    ...(scalars as Pick<ImageModel, (typeof SCALARS)[number]> & { spotSigmaSpreadPx: number }),
    backgroundE: new Float32Array(bytes.buffer, backgroundAt, width * height),
    backgroundDrift,
    badPixels: bytes.subarray(badAt),
  };
}
