import { SPOTS_MOST, settingsOf, shareAt } from './joint-fit-layout';
import { shareLight } from './joint-fit-shares';
import { roundPx } from './joint-fit-window';

// Light of spots has a plane of its own. Which runs of 64 pixels of its rows aren't all zeros is written down, a byte
// each, so that the next frame needs to clear only those.

const RUN_BITS: i32 = 6;

/** Clears the light of all spots. */
export function clearSpots(fit: usize): void {
  const s = settingsOf(fit);
  const runs = (s.imageWidth + 63) >> RUN_BITS;
  for (let y: i32 = 0; y < s.imageHeight; y++) {
    const marks = s.painted + <usize>(y * runs);
    for (let run: i32 = 0; run < runs; run++) {
      if (load<u8>(marks + run) === 0) continue;
      store<u8>(marks + run, 0);
      const left = run << RUN_BITS;
      const pixels = min(64, s.imageWidth - left);
      memory.fill(s.spotLight + ((<usize>(y * s.imageWidth + left)) << 2), 0, (<usize>pixels) << 2);
    }
  }
}

/** Adds the light of a spot to the plane of all spots, or takes it away again (negative brightness). */
export function paintSpot(fit: usize, x: f64, y: f64, brightness: f64, sigma: f32): void {
  const s = settingsOf(fit);
  const left = roundPx(x) - s.reach;
  const top = roundPx(y) - s.reach;
  // Shares of its own, so that those of a fit stay.
  const along = shareAt(fit, s.shareRoom, SPOTS_MOST, 0);
  const next = (<usize>s.shareRoom) << 2;
  const down = along + 3 * next;
  const columns = s.imageWidth - left;
  shareLight(<f32>(x - <f64>left), sigma, s.side, -left, columns, along, along + next, along + 2 * next);
  shareLight(<f32>(y - <f64>top), sigma, s.side, 0, s.side, down, down + next, down + 2 * next);
  const from = max(0, -left);
  const to = min(s.side, columns);
  const last = min(s.side, s.imageHeight - top);
  if (to <= from) return;
  const runs = (s.imageWidth + 63) >> RUN_BITS;
  const firstRun = (left + from) >> RUN_BITS;
  const lastRun = (left + to - 1) >> RUN_BITS;
  for (let j = max(0, -top); j < last; j++) {
    const light = <f32>brightness * load<f32>(down + ((<usize>j) << 2));
    for (let run = firstRun; run <= lastRun; run++) store<u8>(s.painted + <usize>((top + j) * runs + run), 1);
    const row = s.spotLight + (((top + j) * s.imageWidth + left) << 2);
    let i = from;
    for (; i + 4 <= to; i += 4) {
      const at = (<usize>i) << 2;
      const more = f32x4.mul(f32x4.splat(light), v128.load(along + at));
      v128.store(row + at, f32x4.add(v128.load(row + at), more));
    }
    for (; i < to; i++) {
      const at = (<usize>i) << 2;
      store<f32>(row + at, load<f32>(row + at) + light * load<f32>(along + at));
    }
  }
}
