import type { TrackBlock } from '@/components/canvas/track-block';

/** A block as plain lists, tracks by number, so that order and typed arrays don't matter. */
export function contents(block: TrackBlock) {
  const rows = Array.from({ length: block.count }, (_, i) => {
    const [from, to] = [block.start[i], block.start[i + 1]];
    return {
      track: block.track[i],
      population: block.population[i],
      life: [block.firstFrame[i], block.lastFrame[i]],
      frame: [...block.frame.subarray(from, to)],
      // Positions of bridged points are told by the server with its own rounding.
      x: [...block.x.subarray(from, to)].map((x) => Math.round(x * 1e3)),
      y: [...block.y.subarray(from, to)].map((y) => Math.round(y * 1e3)),
      flags: [...block.flags.subarray(from, to)],
    };
  });
  return rows.sort((a, b) => a.track - b.track);
}
