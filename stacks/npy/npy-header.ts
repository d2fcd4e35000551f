import { type SampleKind } from '../frame-layout';
import { StackRefusal } from '../refusal';

/** An array file's description of itself (NumPy enhancement proposal 1, `numpy.lib.format`). */
export interface NpyHeader {
  bits: number;
  sampleKind: SampleKind;
  littleEndian: boolean;
  frames: number;
  height: number;
  width: number;
}

const DTYPES: Record<string, { bits: number; sampleKind: SampleKind }> = {
  u1: { bits: 8, sampleKind: 'uint' },
  i1: { bits: 8, sampleKind: 'int' },
  u2: { bits: 16, sampleKind: 'uint' },
  i2: { bits: 16, sampleKind: 'int' },
  f4: { bits: 32, sampleKind: 'float' },
};

/** NumPy's names of the kinds, for the sentence. */
const KIND_NAMES: Record<string, string> = { i: 'int', u: 'uint', f: 'float', c: 'complex', b: 'bool' };

function dtypeName(text: string): string {
  const [, kind, size] = /^[<>|=]?([a-zA-Z])(\d*)$/.exec(text) ?? [];
  if (kind === 'O') return 'object';
  const name = kind && KIND_NAMES[kind];
  if (!name) return kind ? `${kind}${size}` : 'structured';
  return kind === 'b' ? name : `${name}${Number(size) * 8}`;
}

const refused = (detail: string) => new StackRefusal('NPY_DTYPE', detail);

function parseDtype(text: string) {
  const [, order, dtype] = /^([<>|=]?)(\w\d+)$/.exec(text) ?? [];
  const known = DTYPES[dtype ?? ''];
  if (!known) throw refused(`dtype ${dtypeName(text)} is not accepted.`);
  return { ...known, littleEndian: order !== '>' };
}

function parseShape(text: string): { frames: number; height: number; width: number } {
  const shape = text
    .split(',')
    .map((part) => part.trim().replace(/L$/, ''))
    .filter((part) => part !== '');
  const sizes = shape.map((part) => (/^\d{1,15}$/.test(part) ? Number(part) : NaN));
  if (sizes.some(Number.isNaN)) throw refused(`Shape (${text.slice(0, 60)}) is not readable.`);
  if (sizes.length !== 2 && sizes.length !== 3) {
    throw refused(`The array has ${sizes.length} dimensions; (frames, rows, columns) are needed.`);
  }
  const [width, height, frames] = sizes.toReversed();
  return { frames: frames ?? 1, height: height!, width: width! };
}

/**
 * Reads the header's dictionary: Python text with the keys `descr`, `fortran_order` and `shape`.
 * @throws StackRefusal NPY_DTYPE for anything but a C-ordered array of small integers or 32-bit floats.
 */
export function parseNpyHeader(text: string): NpyHeader {
  const descr = /['"]descr['"]\s*:\s*(?:['"]([^'"]*)['"]|\[)/.exec(text);
  const order = /['"]fortran_order['"]\s*:\s*(True|False)/.exec(text);
  const shape = /['"]shape['"]\s*:\s*\(([^)]*)\)/.exec(text);
  if (!descr || !order || !shape) throw refused('The array header is damaged.');
  const dtype = parseDtype(descr[1] ?? '');
  const sizes = parseShape(shape[1]!);
  if (order[1] === 'True' && !(sizes.frames === 1 && (sizes.height === 1 || sizes.width === 1))) {
    throw refused('Fortran order is not accepted. Save in C order.');
  }
  return { ...dtype, ...sizes };
}
