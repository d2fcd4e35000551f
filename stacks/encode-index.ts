import {
  INDEX_HEAD_BYTES,
  INDEX_MAGIC,
  INDEX_VERSION,
  RECORD_BYTES,
  SEGMENT_BYTES,
  type StackIndex,
} from './stack-index';

/**
 * The index as bytes, little-endian throughout: 32 bytes of head (magic `BLIX`, version, length of
 * the description, length of a record, frames, segments), the description as JSON padded with spaces
 * to a multiple of 8, the frame records, the segment table.
 */
export function encodeStackIndex(index: StackIndex): Uint8Array {
  const { records, segments, frames, ...shape } = index;
  const json = JSON.stringify({
    ...shape,
    maxCount: Number.isFinite(shape.maxCount) ? shape.maxCount : null,
  });
  const text = Buffer.from(json, 'utf8');
  const descriptionBytes = Math.ceil(text.length / 8) * 8;
  const segmentCount = segments.length / 2;
  const bytes = new Uint8Array(
    INDEX_HEAD_BYTES + descriptionBytes + frames * RECORD_BYTES + segmentCount * SEGMENT_BYTES,
  );
  const view = new DataView(bytes.buffer);
  bytes.set(Buffer.from(INDEX_MAGIC, 'latin1'));
  view.setUint32(4, INDEX_VERSION, true);
  view.setUint32(8, descriptionBytes, true);
  view.setUint32(12, RECORD_BYTES, true);
  view.setFloat64(16, frames, true);
  view.setFloat64(24, segmentCount, true);
  bytes.fill(0x20, INDEX_HEAD_BYTES, INDEX_HEAD_BYTES + descriptionBytes);
  bytes.set(text, INDEX_HEAD_BYTES);
  const recordsAt = INDEX_HEAD_BYTES + descriptionBytes;
  bytes.set(records.subarray(0, frames * RECORD_BYTES), recordsAt);
  const segmentsAt = recordsAt + frames * RECORD_BYTES;
  for (let i = 0; i < segments.length; i++) view.setFloat64(segmentsAt + i * 8, segments[i]!, true);
  return bytes;
}
