/** Counts from `low` (0) to `high` (255), cut off outside; with `high <= low` all above `low` is white. */
export function stretchToBytes(counts: Float32Array, low: number, high: number): Uint8Array {
  const out = new Uint8Array(counts.length);
  const scale = high > low ? 255 / (high - low) : Infinity;
  for (let i = 0; i < counts.length; i++) {
    const above = counts[i]! - low;
    out[i] = above <= 0 ? 0 : Math.min(255, Math.round(above * scale));
  }
  return out;
}
