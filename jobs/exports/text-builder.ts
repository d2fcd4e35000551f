/** Room that text is given at first; it doubles when a piece needs more. */
const ROOM_BYTES = 1 << 20;

/** A character takes at most this many bytes of UTF-8 for each unit that `length` counts. */
const BYTES_PER_UNIT = 3;

/**
 * Gathers text as UTF-8 in one piece of memory that is used again. Strings that grow by a row at a time would be
 * copied whole before they are written, and their memory waits for the collector: hundreds of megabytes.
 */
export class TextBuilder {
  private bytes = Buffer.allocUnsafeSlow(ROOM_BYTES);
  private used = 0;

  add(text: string): void {
    const needed = this.used + BYTES_PER_UNIT * text.length;
    if (needed > this.bytes.length) this.grow(needed);
    this.used += this.bytes.write(text, this.used);
  }

  /** What was gathered since the last call, as a view that holds until text is added again. */
  take(): Uint8Array {
    const view = this.bytes.subarray(0, this.used);
    this.used = 0;
    return view;
  }

  private grow(needed: number): void {
    const larger = Buffer.allocUnsafeSlow(Math.max(needed, 2 * this.bytes.length));
    this.bytes.copy(larger, 0, 0, this.used);
    this.bytes = larger;
  }
}
