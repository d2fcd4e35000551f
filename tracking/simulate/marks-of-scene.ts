import type { PlacePx } from '../corrections/correction';
import type { MarkedFrame } from '../corrections/marked-frames';
import { inOrder } from '../details/tangle-shape';
import { KIND_TRAPPED, type Scene } from './scene';

/** Two tracers of a line nearer than this are seen as one, px. */
const RESOLVED_PX = 2;

/**
 * What somebody marks who knows which tracers share a line: every line with two or more tracers that emit in the
 * frame, from the first to the last.
 */
export function marksOfScene(scene: Scene, frames: readonly number[]): MarkedFrame[] {
  return frames.map((frame) => {
    const places = new Map<number, { x: number; y: number }[]>();
    for (let tracer = 0; tracer < scene.tracers; tracer++) {
      if (scene.kind[tracer] !== KIND_TRAPPED || scene.line[tracer] < 0) continue;
      for (let k = scene.start[tracer]; k < scene.start[tracer + 1]; k++) {
        if (scene.frame[k] !== frame) continue;
        const own = places.get(scene.line[tracer]) ?? [];
        own.push({ x: scene.xPx[k], y: scene.yPx[k] });
        places.set(scene.line[tracer], own);
      }
    }
    const lines = [...places.values()].flatMap((own) => {
      const chain = inOrder(own);
      const [first, last] = [chain[0], chain[chain.length - 1]];
      if (Math.hypot(last.x - first.x, last.y - first.y) < RESOLVED_PX) return [];
      return [chain.map(({ x, y }): PlacePx => [x, y])];
    });
    return { frame, lines, complete: true };
  });
}
