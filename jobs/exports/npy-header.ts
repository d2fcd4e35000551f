const MAGIC = Buffer.from([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0]);
const ALIGN = 64;
const PREFIX = MAGIC.length + 2;

/**
 * Header of a one-dimensional `.npy` array, format 1.0: magic, length, a Python literal padded with spaces so that
 * the data begin at a multiple of 64 bytes (NumPy Enhancement Proposal 1, and `numpy.lib.format`).
 * @param descr type as NumPy writes it, e.g. `<f8`
 */
export function npyHeader(descr: string, length: number): Buffer {
  const literal = `{'descr': '${descr}', 'fortran_order': False, 'shape': (${length},), }`;
  const size = Math.ceil((PREFIX + literal.length + 1) / ALIGN) * ALIGN;
  const text = `${literal.padEnd(size - PREFIX - 1)}\n`;
  const head = Buffer.alloc(size);
  MAGIC.copy(head);
  head.writeUInt16LE(text.length, MAGIC.length);
  head.write(text, PREFIX, 'latin1');
  return head;
}

/** Text as NumPy's fixed-width UCS-4, padded with zeros; unknown is empty. */
export function unicodeArray(values: readonly (string | null)[]): { descr: string; bytes: Buffer } {
  const points = values.map((value) => Array.from(value ?? '', (letter) => letter.codePointAt(0)!));
  const width = points.reduce((most, one) => Math.max(most, one.length), 1);
  const bytes = Buffer.alloc(values.length * width * 4);
  points.forEach((one, i) => one.forEach((point, k) => bytes.writeUInt32LE(point, (i * width + k) * 4)));
  return { descr: `<U${width}`, bytes };
}
