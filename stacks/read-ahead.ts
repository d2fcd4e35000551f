import { setImmediate } from 'node:timers/promises';
import { type Frame } from '@/tracking/types';
import { type StackReader } from './open-stack';

/**
 * Frames `from` to `to` - 1 in order; while one is worked on, the disk is asked for the next. Two frames
 * take turns, so one is valid until the next is asked for.
 * @throws what `readFrame` throws, when the frame's turn has come.
 */
export async function* readAhead(stack: StackReader, from: number, to: number): AsyncGenerator<Frame> {
  const { width, height } = stack;
  const rooms = [0, 1].map((): Frame => ({ width, height, counts: new Float32Array(width * height) }));
  const fetch = (frame: number) => {
    const coming = stack.readFrame(frame, rooms[frame % 2]);
    // Whoever stops early never waits for it.
    coming.catch(() => undefined);
    return coming;
  };
  if (from >= to) return;
  let coming = fetch(from);
  for (let frame = from; frame < to; frame++) {
    const picture = await coming;
    if (frame + 1 < to) {
      coming = fetch(frame + 1);
      // The request leaves only when this turn of the event loop ends, and work on a frame doesn't end it.
      await setImmediate();
    }
    yield picture;
  }
}
