/**
 * Which frames to load, in order: the one shown, then those ahead in the direction of travel, with
 * every third from behind, since people turn round.
 *
 * @param direction 1 forwards, -1 backwards.
 * @param reach how many frames to name at most, the shown one included.
 */
export function prefetchOrder(frame: number, direction: 1 | -1, frames: number, reach: number): number[] {
  const order = [frame];
  let ahead = 1;
  let behind = 1;
  const inside = (n: number) => n >= 0 && n < frames;
  while (order.length < Math.min(reach, frames)) {
    const before = order.length;
    for (let k = 0; k < 3 && order.length < reach; k += 1) {
      const next = frame + direction * ahead;
      if (!inside(next)) break;
      order.push(next);
      ahead += 1;
    }
    const back = frame - direction * behind;
    if (inside(back) && order.length < reach) {
      order.push(back);
      behind += 1;
    }
    if (order.length === before) break;
  }
  return order;
}
