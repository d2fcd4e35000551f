import { type ImageQuality } from './image-quality';
import { addToGrid, pictureShift, spectrum, squareGrid } from './picture-shift';

/** Positions in the stack at which the picture's place is measured. */
const GROUPS_MAX = 17;
/** Frames averaged at each position, so that what stays in place stands out from what flows. */
const FRAMES_PER_GROUP = 8;

export type Drift = Pick<ImageQuality, 'drift' | 'driftPx'>;

export interface DriftMeter {
  /** Frames in order; those between the groups are skipped at no cost. */
  add(frame: number, counts: Float32Array): void;
  result(): Drift;
}

interface Group {
  from: number;
  /** One past the last frame. */
  to: number;
}

function groupsOf(frames: number): Group[] {
  const count = Math.min(GROUPS_MAX, Math.floor(frames / FRAMES_PER_GROUP) || 1);
  const size = Math.min(FRAMES_PER_GROUP, frames);
  return Array.from({ length: count }, (_, i) => {
    const from = count === 1 ? 0 : Math.round((i * (frames - size)) / (count - 1));
    return { from, to: from + size };
  });
}

/** How the whole picture (windows, walls, the light sheet's edges) moves against its place in the first frames. */
export function createDriftMeter(width: number, height: number, frames: number): DriftMeter {
  const grid = squareGrid(width, height);
  const groups = groupsOf(frames);
  const middles = groups.map(({ from, to }) => Math.floor((from + to - 1) / 2));
  const shifts: ({ x: number; y: number } | null)[] = [];
  let first: ReturnType<typeof spectrum> | null = null;
  let sums = new Float64Array(grid ? grid.side ** 2 : 0);

  const close = ({ side, bin }: NonNullable<typeof grid>) => {
    const now = spectrum(sums, side);
    first ??= now;
    const cells = pictureShift(first, now, side);
    shifts.push(cells && { x: cells.x * bin, y: cells.y * bin });
    sums = new Float64Array(side ** 2);
  };

  return {
    add(frame, counts) {
      const group = groups[shifts.length];
      if (!grid || !group || frame < group.from) return;
      addToGrid(counts, width, grid, sums);
      if (frame === group.to - 1) close(grid);
    },
    result() {
      const known = shifts.slice(1).flatMap((shift) => (shift ? [Math.hypot(shift.x, shift.y)] : []));
      return {
        driftPx: known.length > 0 ? Math.max(...known) : null,
        drift: {
          frames: middles.slice(0, shifts.length),
          xPx: shifts.map((shift) => shift?.x ?? null),
          yPx: shifts.map((shift) => shift?.y ?? null),
        },
      };
    },
  };
}
