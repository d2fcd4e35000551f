import { type FrameLayout } from './frame-layout';

/** Counts at the samples' upper and lower end mirrored: `v -> max + min - v`. */
function mirror(counts: Float32Array, layout: FrameLayout): void {
  const sum = layout.sampleKind === 'int' ? -1 : 2 ** layout.bits - 1;
  for (let i = 0; i < counts.length; i++) counts[i] = sum - counts[i]!;
}

/**
 * One count per pixel from interleaved samples: the chosen channel, or the mean of all; palette
 * numbers become counts; WhiteIsZero is turned round.
 * @param out one entry per pixel; may be `samples` itself when there is one sample per pixel.
 */
export function pickChannel(samples: Float32Array, layout: FrameLayout, out: Float32Array): void {
  const { samplesPerPixel: n, channel, palette } = layout;
  const pixels = out.length;
  if (n > 1 && channel === 'mean') {
    for (let i = 0; i < pixels; i++) {
      let sum = 0;
      for (let c = 0; c < n; c++) sum += samples[i * n + c]!;
      out[i] = sum / n;
    }
  } else if (n > 1) {
    for (let i = 0; i < pixels; i++) out[i] = samples[i * n + Number(channel)]!;
  } else if (out !== samples) {
    out.set(samples.subarray(0, pixels));
  }
  if (palette) for (let i = 0; i < pixels; i++) out[i] = palette[out[i]!] ?? 0;
  if (layout.invert) mirror(out, layout);
}
