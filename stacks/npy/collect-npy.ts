import { assertFrameSize } from '../check-size';
import { type ByteSource, OutOfRangeError } from '../byte-source';
import { plainLayout } from '../frame-layout';
import { STACK_LIMITS } from '../limits';
import { StackRefusal } from '../refusal';
import { grouped } from '../sentence';
import { type PagePlace, type StackCollector, tooManyPages } from '../stack-collector';
import { type NpyHeader, parseNpyHeader } from './npy-header';

/** A dictionary of three keys is short; version 2 could claim 4 GB of it. */
const HEADER_BYTES_MAX = 64 * 1024;

/** The header's text and the byte where the data begins. */
async function readHeader(source: ByteSource): Promise<{ text: string; dataAt: number }> {
  try {
    const head = Buffer.from(await source.read(0, 12));
    const version = head[6]!;
    if (version < 1 || version > 3) {
      throw new StackRefusal('NPY_DTYPE', `NPY version ${version} is not accepted.`);
    }
    const [start, length] = version === 1 ? [10, head.readUInt16LE(8)] : [12, head.readUInt32LE(8)];
    if (length > HEADER_BYTES_MAX) throw new StackRefusal('NPY_DTYPE', 'The array header is damaged.');
    const text = Buffer.from(await source.read(start, length)).toString('utf8');
    return { text, dataAt: start + length };
  } catch (cause) {
    if (cause instanceof OutOfRangeError) throw new StackRefusal('NPY_DTYPE', 'The array header is cut.');
    throw cause;
  }
}

function sizeMismatch(header: NpyHeader, needed: number, held: number, frameBytes: number): StackRefusal {
  const intact = Math.min(header.frames, Math.floor(held / frameBytes));
  return new StackRefusal(
    'NPY_DTYPE',
    `The array needs ${grouped(needed)} bytes but the file holds ${grouped(held)}.`,
    held < needed && intact > 0 ? { usePages: intact } : {},
  );
}

/**
 * Adds the frames of a NumPy array file of shape (frames, rows, columns), or (rows, columns), to the stack.
 * @throws StackRefusal NPY_DTYPE for other arrays and for files shorter or longer than their shape needs.
 */
export async function collectNpy(
  source: ByteSource,
  collector: StackCollector,
  place: PagePlace,
): Promise<void> {
  const { text, dataAt } = await readHeader(source);
  const header = parseNpyHeader(text);
  const { width, height, frames, bits, sampleKind } = header;
  if (frames === 0) throw new StackRefusal('NO_PAGES', 'The file has no image pages.');
  assertFrameSize(width, height, 1);
  if (frames > STACK_LIMITS.pages) throw tooManyPages();
  const frameBytes = (width * height * bits) / 8;
  const [needed, held] = [frames * frameBytes, source.sizeBytes - dataAt];
  const wanted = Math.min(frames, collector.pagesMax);
  const enough = collector.pagesMax < Infinity && held >= wanted * frameBytes;
  if (held !== needed && !enough) throw sizeMismatch(header, needed, held, frameBytes);
  const layout = plainLayout(width, height, header);
  for (let k = 0; k < wanted; k++) {
    const segments = {
      offsets: Float64Array.of(dataAt + k * frameBytes),
      lengths: Float64Array.of(frameBytes),
    };
    collector.add({ facts: { width, height, bits, sampleKind, channels: 1 }, layout, segments }, place);
  }
}
