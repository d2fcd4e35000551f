import type { CandidateView } from '@/lib/views/analysis-view';
import type { CandidateMark } from './draw-candidates';
import { indexOfTrack, trailAt, type TrackBlock } from './track-block';

/** Frames after the meeting at which the direction of parting is read. */
const AFTER_FRAMES = 6;

/** Candidates as marks on the image and on the time line. */
export function candidateMarks(
  candidates: readonly CandidateView[],
  frameIntervalS: number,
  frames: number,
): (CandidateMark & { trackA: number; trackB: number })[] {
  return candidates.map((candidate) => ({
    event: candidate.event,
    frame: Math.max(0, Math.min(frames - 1, Math.round(candidate.t0_s / frameIntervalS))),
    xPx: candidate.x_px,
    yPx: candidate.y_px,
    partingRad: 0,
    kind: kindOf(candidate),
    trackA: candidate.trackA,
    trackB: candidate.trackB,
  }));
}

/** People's verdict wins over the machine's. */
export function kindOf({
  verdict,
  accepted,
}: Pick<CandidateView, 'verdict' | 'accepted'>): CandidateMark['kind'] {
  if (verdict === 'yes') return 'confirmed';
  if (verdict === 'no') return 'rejected';
  return accepted ? 'candidate' : 'rejected';
}

/** The axis along which two tracks part after a frame, radians from x towards y; 0 where it can't be told. */
export function partingAxis(block: TrackBlock, trackA: number, trackB: number, frame: number): number {
  const a = indexOfTrack(block, trackA);
  const b = indexOfTrack(block, trackB);
  if (a < 0 || b < 0) return 0;
  const trailA = { first: 0, last: 0 };
  const trailB = { first: 0, last: 0 };
  for (let later = AFTER_FRAMES; later >= 0; later -= 1) {
    if (!trailAt(block, a, frame + later, 1, trailA) || !trailAt(block, b, frame + later, 1, trailB))
      continue;
    return Math.atan2(
      block.y[trailB.last] - block.y[trailA.last],
      block.x[trailB.last] - block.x[trailA.last],
    );
  }
  return 0;
}
