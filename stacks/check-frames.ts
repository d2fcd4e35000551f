import { createQualityMeter } from '@/tracking/image-quality/quality-meter';
import { type ImageQuality } from '@/tracking/image-quality/image-quality';
import { type ByteSource } from './byte-source';
import { ShortFrameError } from './decode-frame';
import { FrameNotes } from './frame-notes';
import { type FrameReader, frameReader } from './frame-reader';
import { type IndexReader } from './index-reader';
import { corruptPng } from './png/collect-png';
import { type StackNote, StackRefusal } from './refusal';
import { grouped, shownName } from './sentence';
import { extensionOf } from './sniff';
import { EntrySizeError } from './zip/expand-entry';
import { brokenEntry } from './zip/collect-zip';

/** The refusal that a frame's decoder error means. */
function unreadable(cause: RangeError | Error, frame: number, fileName: string | null): StackRefusal {
  const offer = frame > 0 ? { usePages: frame } : {};
  const name = fileName === null ? `Page ${frame + 1}` : `Page ${frame + 1} (${shownName(fileName)})`;
  if (cause instanceof EntrySizeError) return brokenEntry(fileName ?? name, cause);
  if (cause instanceof ShortFrameError) {
    const [needed, held] = [grouped(cause.neededBytes), grouped(cause.heldBytes)];
    return new StackRefusal('STRIP_SHORT', `${name} needs ${needed} bytes but holds ${held}.`, offer, {
      cause,
    });
  }
  if (fileName !== null && extensionOf(fileName) === 'png') {
    const { code, detail } = corruptPng(fileName);
    return new StackRefusal(code, detail, offer, { cause });
  }
  return new StackRefusal('PAGE_DAMAGED', `${name} is damaged: its data can't be unpacked.`, offer, {
    cause,
  });
}

/** Faults of the data, as opposed to those of the disk: what decoders throw. */
function isDataFault(cause: unknown): cause is Error {
  if (!(cause instanceof Error)) return false;
  const code = 'code' in cause ? String(cause.code) : '';
  return cause instanceof RangeError || /^(Z_|ERR_BUFFER_TOO_LARGE|ERR_OUT_OF_RANGE)/.test(code);
}

async function readOrRefuse(
  reader: FrameReader,
  frame: number,
  counts: Float32Array,
  names: FrameNames,
): Promise<number> {
  try {
    return await reader.read(frame, counts);
  } catch (cause) {
    if (!isDataFault(cause)) throw cause;
    throw unreadable(cause, frame, names.fileNameOf(frame));
  }
}

export interface FrameNames {
  /** Name of the file that a frame lies in, or null when the stack is one file. */
  fileNameOf(frame: number): string | null;
}

/**
 * Reads every frame once.
 * @throws StackRefusal for the first frame whose data is short or damaged; the signal's reason.
 */
export async function checkFrames(
  sources: readonly ByteSource[],
  index: IndexReader,
  names: FrameNames,
  options: { onFrame: (done: number) => void; signal?: AbortSignal | undefined },
): Promise<{ imageQuality: ImageQuality; warnings: StackNote[] }> {
  const reader = frameReader(sources, index);
  const meter = createQualityMeter(index);
  const notes = new FrameNotes();
  const counts = new Float32Array(index.width * index.height);
  for (let frame = 0; frame < index.frames; frame++) {
    options.signal?.throwIfAborted();
    const masked = await readOrRefuse(reader, frame, counts, names);
    notes.add(counts, masked, meter.add(frame, counts));
    options.onFrame(frame + 1);
  }
  return { imageQuality: meter.result(), warnings: notes.warnings() };
}
