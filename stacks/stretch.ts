/** How brightness between black and white is shown. */
export type BrightnessScale = 'linear' | 'log';

/**
 * A logarithmic picture shows a count `t` of the way from black to white as `ln(1 + 10 t) / ln 11`: a
 * tenth of the range reaches 29 %, which lifts faint tracers beside bright ones without turning the noise
 * around black into grey. Common practice, no source.
 */
const LOG_GAIN = 10;
const LOG_STEPS = 65_536;

let logTable: Uint8Array | null = null;

/** Counts from `low` (0) to `high` (255) on a logarithmic scale, cut off outside. */
export function stretchToBytesLog(counts: Float32Array, low: number, high: number): Uint8Array {
  if (!(high > low)) return stretchToBytes(counts, low, high);
  logTable ??= Uint8Array.from({ length: LOG_STEPS + 1 }, (_, i) =>
    Math.round((255 * Math.log1p((LOG_GAIN * i) / LOG_STEPS)) / Math.log1p(LOG_GAIN)),
  );
  const out = new Uint8Array(counts.length);
  const scale = LOG_STEPS / (high - low);
  for (let i = 0; i < counts.length; i++) {
    const above = (counts[i]! - low) * scale;
    out[i] = above > 0 ? logTable[Math.min(LOG_STEPS, Math.round(above))]! : 0;
  }
  return out;
}

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
