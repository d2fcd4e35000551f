import { type ByteSource, assertInside } from './byte-source';

/** Page lists and frame indexes are read in small pieces: one read of this size often serves several of them. */
const WINDOW_BYTES = 16 * 1024;

/** Small reads at any place of a source, served from the last stretch read where possible. */
export class ByteWindow {
  private start = 0;
  private bytes: Uint8Array = new Uint8Array(0);

  constructor(readonly source: ByteSource) {}

  /** @throws OutOfRangeError when the range isn't wholly inside the source. */
  async view(offset: number, length: number): Promise<DataView> {
    assertInside(this.source, offset, length);
    if (offset < this.start || offset + length > this.start + this.bytes.byteLength) {
      const size = Math.min(Math.max(length, WINDOW_BYTES), this.source.sizeBytes - offset);
      this.bytes = await this.source.read(offset, size);
      this.start = offset;
    }
    return new DataView(this.bytes.buffer, this.bytes.byteOffset + offset - this.start, length);
  }
}
