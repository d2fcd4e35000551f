import { type ByteSource } from './byte-source';
import { ByteWindow } from './byte-window';
import { type FrameLayout } from './frame-layout';
import { type Segments } from './segments';
import {
  type FrameRecord,
  INDEX_HEAD_BYTES,
  INDEX_MAGIC,
  type IndexedSource,
  INDEX_VERSION,
  readRecord,
  RECORD_BYTES,
  SEGMENT_BYTES,
  type StackShape,
} from './stack-index';

export interface IndexReader extends StackShape {
  frames: number;
  layouts: FrameLayout[];
  sources: IndexedSource[];
  /** Two short reads at most, wherever the frame stands; none for most frames that follow each other. */
  locate(frame: number): Promise<FrameRecord & { segments: Segments }>;
}

function viewOf(bytes: Uint8Array): DataView {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

async function readHead(source: ByteSource) {
  const head = await source.read(0, INDEX_HEAD_BYTES);
  const view = viewOf(head);
  const magic = Buffer.from(head.subarray(0, 4)).toString('latin1');
  const [version, recordBytes] = [view.getUint32(4, true), view.getUint32(12, true)];
  if (magic !== INDEX_MAGIC || version !== INDEX_VERSION || recordBytes !== RECORD_BYTES) {
    throw new RangeError(
      `Got frame index ${JSON.stringify(magic)} v${version} when expected ${INDEX_MAGIC} v${INDEX_VERSION}.`,
    );
  }
  return {
    descriptionBytes: view.getUint32(8, true),
    frames: view.getFloat64(16, true),
    segmentCount: view.getFloat64(24, true),
  };
}

/**
 * Opens an encoded frame index without loading its tables.
 * @throws RangeError when the bytes are no index of this version, or are cut.
 */
export async function openIndex(source: ByteSource): Promise<IndexReader> {
  const { descriptionBytes, frames, segmentCount } = await readHead(source);
  const recordsAt = INDEX_HEAD_BYTES + descriptionBytes;
  const segmentsAt = recordsAt + frames * RECORD_BYTES;
  if (source.sizeBytes !== segmentsAt + segmentCount * SEGMENT_BYTES) {
    throw new RangeError(`The frame index has ${source.sizeBytes} bytes and is cut or too long.`);
  }
  const text = Buffer.from(await source.read(INDEX_HEAD_BYTES, descriptionBytes)).toString('utf8');
  const shape = JSON.parse(text) as Omit<IndexReader, 'frames' | 'locate'> & { maxCount: number | null };
  const records = new ByteWindow(source);
  const segments = new ByteWindow(source);
  return {
    ...shape,
    maxCount: shape.maxCount ?? Infinity,
    frames,
    async locate(frame) {
      const record = readRecord(await records.view(recordsAt + frame * RECORD_BYTES, RECORD_BYTES), 0);
      const from = segmentsAt + record.firstSegment * SEGMENT_BYTES;
      const view = await segments.view(from, record.segmentCount * SEGMENT_BYTES);
      const pick = (part: 0 | 8) =>
        Float64Array.from({ length: record.segmentCount }, (_, i) =>
          view.getFloat64(i * SEGMENT_BYTES + part, true),
        );
      return { ...record, segments: { offsets: pick(0), lengths: pick(8) } };
    },
  };
}
