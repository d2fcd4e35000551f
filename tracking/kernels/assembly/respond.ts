import { correlateColumns, correlateRow } from './correlate';
import { FrameFacts } from './counts';
import { findPeaksOfRows } from './find-peaks';
import { noiseRow } from './noise-row';

/**
 * Writes down the facts of the frame, then fills `response`: the frame in units of its own noise (see `noiseRow`),
 * correlated with the spot along x and y. Rows are correlated along x into a band of rows that
 * stays in the cache, and from there along y; peaks are looked for while their rows are there, too.
 *
 * @param facts address of `FrameFacts`
 * @param noise f32, room for `reach` zeros, a row and `reach` zeros
 * @param band f32, `bandRows` + 2 `reach` rows of `paddedWidth` pixels, which is a multiple of 16
 * @param weights f32 at distance 0 .. reach
 * @param correctionX f32 factor per column @param correctionY f32 factor per row
 * @param level peaks from here on are found, none for infinity @param peaks i32, see `findPeaks`
 * @returns number of peaks
 */
export function respond(
  facts: usize,
  counts: usize,
  bad: usize,
  background: usize,
  response: usize,
  width: i32,
  height: i32,
  noise: usize,
  band: usize,
  bandRows: i32,
  paddedWidth: i32,
  weights: usize,
  reach: i32,
  correctionX: usize,
  correctionY: usize,
  offset: f32,
  perCount: f32,
  saturation: f32,
  scale: f32,
  shift: f32,
  floor: f32,
  level: f32,
  peaks: usize,
): i32 {
  const frame = changetype<FrameFacts>(facts);
  frame.offset = offset;
  frame.perCount = perCount;
  frame.saturation = saturation;
  frame.scale = scale;
  frame.shift = shift;
  const stride = paddedWidth << 2;
  const first = noise + ((<usize>reach) << 2);
  // What noiseRow writes behind the last pixel belongs to the next row.
  const behind = first + ((<usize>width) << 2);
  const behindBytes = (((width + 3) & ~3) - width) << 2;
  // Row r of the band holds row top - reach + r of the frame. Above the frame there is nothing.
  memory.fill(band, 0, reach * stride);
  let next = 0;
  let place = band + <usize>(reach * stride);
  let searched = 0;
  let lastPeak = peaks;
  for (let top = 0; top < height; top += bandRows) {
    const rows = min(bandRows, height - top);
    for (; next < top + rows + reach; next++) {
      if (next < height) {
        const at = <usize>next * <usize>width;
        const far = at << 2;
        noiseRow(frame, counts + far, bad + at, background + far, first, width, floor);
        memory.fill(behind, 0, behindBytes);
        correlateRow(first, weights, reach, correctionX, place, paddedWidth);
      } else {
        memory.fill(place, 0, stride);
      }
      place += stride;
    }
    for (let r = 0; r < rows; r++) {
      const y = top + r;
      const row = band + <usize>((reach + r) * stride);
      const factor = load<f32>(correctionY + ((<usize>y) << 2));
      const out = response + ((<usize>y * <usize>width) << 2);
      correlateColumns(row, stride, weights, reach, factor, out, width);
    }
    if (level < f32.MAX_VALUE) {
      // The last row's peaks hang on the row below, unless there is none.
      const whole = top + rows < height ? top + rows - 1 : height;
      lastPeak = findPeaksOfRows(response, width, height, searched, whole, level, lastPeak);
      searched = whole;
    }
    memory.copy(band, band + <usize>(rows * stride), 2 * reach * stride);
    place = band + <usize>(2 * reach * stride);
  }
  return <i32>((lastPeak - peaks) >> 2);
}
