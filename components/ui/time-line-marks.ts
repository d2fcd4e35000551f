/** An event on the time line. `candidate`: not judged yet. */
export interface TimeLineEvent {
  frame: number;
  kind: 'confirmed' | 'candidate' | 'rejected';
}

/** Events so close on screen that they share one bead. */
export interface TimeLineMark {
  xPx: number;
  kind: TimeLineEvent['kind'];
  count: number;
  frame: number;
}

/** Beads closer than this join to one with a count. */
const JOIN_PX = 8;

/** Marks of the events along a thread `widthPx` long of `frames` frames; the strongest kind of a group wins. */
export function timeLineMarks(
  events: readonly TimeLineEvent[],
  frames: number,
  widthPx: number,
): TimeLineMark[] {
  const rank = { confirmed: 2, candidate: 1, rejected: 0 };
  const sorted = [...events].sort((a, b) => a.frame - b.frame);
  const marks: TimeLineMark[] = [];
  for (const event of sorted) {
    const xPx = frameToPx(event.frame, frames, widthPx);
    const last = marks.at(-1);
    if (last && xPx - last.xPx < JOIN_PX) {
      last.count += 1;
      if (rank[event.kind] > rank[last.kind]) last.kind = event.kind;
    } else {
      marks.push({ xPx, kind: event.kind, count: 1, frame: event.frame });
    }
  }
  return marks;
}

/** Frame 0 stands at the left end, the last frame at the right one. */
export const frameToPx = (frame: number, frames: number, widthPx: number) =>
  frames > 1 ? (frame / (frames - 1)) * widthPx : 0;

/** The frame under a place on the thread, kept inside the recording. */
export const pxToFrame = (xPx: number, frames: number, widthPx: number) =>
  Math.max(0, Math.min(frames - 1, Math.round((xPx / Math.max(1, widthPx)) * (frames - 1))));

/** About `parts` round steps of a recording: 0, 5000, 10000 ... the last frame number stays off the list. */
export function frameTicks(frames: number, parts: number): number[] {
  const rough = frames / Math.max(1, parts);
  const power = 10 ** Math.floor(Math.log10(Math.max(1, rough)));
  const step = Math.max(1, [1, 2, 5, 10].map((m) => m * power).find((s) => s >= rough) ?? 10 * power);
  const ticks: number[] = [];
  for (let frame = 0; frame < frames; frame += step) ticks.push(frame);
  return ticks;
}
