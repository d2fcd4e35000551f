/** The pace of the last quarter of a minute: long enough to be calm, short enough to notice a slow link. */
const WINDOW_MS = 15_000;

interface Sample {
  atMs: number;
  bytes: number;
}

/** Speed of a transfer from what has gone over so far; times come from outside. */
export class SpeedMeter {
  private samples: Sample[] = [];

  /** @param bytes total sent until now; less than before means that the transfer began anew. */
  add(bytes: number, atMs: number): void {
    const last = this.samples.at(-1);
    if (last && bytes < last.bytes) this.samples = [];
    this.samples.push({ atMs, bytes });
    // One sample older than the window stays, so that the window is always covered.
    while (this.samples.length > 2 && this.samples[1].atMs <= atMs - WINDOW_MS) this.samples.shift();
  }

  /** Forgets the pace, as after a pause. */
  reset(): void {
    this.samples = [];
  }

  /** Bytes per second over the window that ends now; null before anything can be said. */
  bytesPerS(nowMs: number): number | null {
    const first = this.samples.at(0);
    const last = this.samples.at(-1);
    if (!first || !last || last.atMs === first.atMs) return null;
    // Time without news counts too: a link that hangs gets slower, not faster.
    return ((last.bytes - first.bytes) / (Math.max(nowMs, last.atMs) - first.atMs)) * 1000;
  }

  /** Seconds until `totalBytes`; null while the pace is unknown or nothing moves. */
  secondsLeft(totalBytes: number, nowMs: number): number | null {
    const pace = this.bytesPerS(nowMs);
    const last = this.samples.at(-1);
    if (!pace || pace <= 0 || !last) return null;
    return Math.max(0, totalBytes - last.bytes) / pace;
  }
}
