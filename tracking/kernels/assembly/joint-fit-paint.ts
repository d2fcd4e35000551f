import { SPOTS_MOST, settingsOf, shareAt } from './joint-fit-layout';
import { shareLight } from './joint-fit-shares';
import { roundPx } from './joint-fit-window';

/** Adds the light of a spot to the model of the image, or takes it away again (negative brightness). */
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
  for (let j = max(0, -top); j < last; j++) {
    const light = <f32>brightness * load<f32>(down + ((<usize>j) << 2));
    const row = s.model + (((top + j) * s.imageWidth + left) << 2);
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
