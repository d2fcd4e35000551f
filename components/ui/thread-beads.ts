/** One stage of work along a thread: how many beads it has and how many are full (a half may be at work). */
export interface ThreadStage {
  beads: number;
  filled: number;
}

export interface Bead {
  x: number;
  fill: 'full' | 'half' | 'empty';
}

/** Beads of each stage of an analysis, in order. */
export const ANALYSIS_BEADS = { frames: 6, detection: 10, tracks: 10, populations: 4, estimates: 3 } as const;
export type AnalysisStage = keyof typeof ANALYSIS_BEADS;

const PITCH_PX = 10;
/** Extra distance between stages. */
const KNOT_PX = 9;
const EDGE_PX = 5;

/** Places of all beads along the thread, and how far the thread is done. Widths in px. */
export function placeBeads(stages: readonly ThreadStage[]): {
  beads: Bead[];
  widthPx: number;
  doneToPx: number;
} {
  const beads: Bead[] = [];
  let x = EDGE_PX;
  let doneToPx = 0;
  stages.forEach((stage, index) => {
    if (index > 0) x += KNOT_PX;
    for (let i = 0; i < stage.beads; i += 1) {
      const level = stage.filled - i;
      const fill = level >= 1 ? 'full' : level > 0 ? 'half' : 'empty';
      if (fill !== 'empty') doneToPx = x;
      beads.push({ x, fill });
      x += PITCH_PX;
    }
  });
  return { beads, widthPx: Math.max(0, x - PITCH_PX + EDGE_PX), doneToPx };
}

/**
 * Beads filled by a share 0..1 of a stage. A full bead means finished and safe: the last one fills
 * only at 1, and what has begun shows at least a half bead.
 */
export function filledBeads(share: number, beads: number): number {
  if (!(share > 0)) return 0;
  if (share >= 1) return beads;
  const exact = share * beads;
  const whole = Math.floor(exact);
  return whole + (exact > whole || whole === 0 ? 0.5 : 0);
}

/** The stages of an analysis at work in `stage`, of which `share` 0..1 is done; `done` fills all. */
export function analysisStages(
  at: { stage: AnalysisStage; share: number } | 'done' | 'waiting',
): ThreadStage[] {
  const names = Object.keys(ANALYSIS_BEADS) as AnalysisStage[];
  const current = at === 'done' ? names.length : at === 'waiting' ? -1 : names.indexOf(at.stage);
  return names.map((name, index) => {
    const beads = ANALYSIS_BEADS[name];
    if (index < current) return { beads, filled: beads };
    if (index === current && typeof at === 'object') return { beads, filled: filledBeads(at.share, beads) };
    return { beads, filled: 0 };
  });
}
