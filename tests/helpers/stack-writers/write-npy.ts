import { sampleBytes } from './sample-bytes';

const TYPES = {
  u1: { bits: 8, kind: 'uint' },
  i1: { bits: 8, kind: 'int' },
  u2: { bits: 16, kind: 'uint' },
  i2: { bits: 16, kind: 'int' },
  f4: { bits: 32, kind: 'float' },
} as const;

/** An array file with any header text (numpy.lib.format: magic, version, length, dictionary padded to 64 bytes). */
export function npyWithHeader(dictionary: string, data: Uint8Array, version: 1 | 2 = 1): Buffer {
  const prefix = version === 1 ? 10 : 12;
  const padding = 64 - ((prefix + dictionary.length + 1) % 64 || 64);
  const text = `${dictionary}${' '.repeat(padding)}\n`;
  const head = Buffer.alloc(prefix);
  head.write('\x93NUMPY', 'latin1');
  head[6] = version;
  if (version === 1) head.writeUInt16LE(text.length, 8);
  else head.writeUInt32LE(text.length, 8);
  return Buffer.concat([head, Buffer.from(text, 'latin1'), data]);
}

/** A C-ordered array of the shape given. */
export function writeNpy(
  values: ArrayLike<number>,
  shape: readonly number[],
  dtype: keyof typeof TYPES,
  options: { littleEndian?: boolean; version?: 1 | 2 } = {},
): Buffer {
  const { littleEndian = true, version = 1 } = options;
  const format = TYPES[dtype];
  const order = format.bits === 8 ? '|' : littleEndian ? '<' : '>';
  const dictionary = `{'descr': '${order}${dtype}', 'fortran_order': False, 'shape': (${shape.join(', ')},), }`;
  return npyWithHeader(dictionary, sampleBytes(values, values.length, { ...format, littleEndian }), version);
}
