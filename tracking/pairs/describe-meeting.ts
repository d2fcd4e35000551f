import type { Conditions, Tracks } from '../types';
import type { ReconnectionCandidate } from './candidate';
import type { Meeting } from './close-pairs';
import { BIC_GAIN_MIN, failedByExponent, failedByLaw, sidesOf } from './judge-meeting';
import type { MeetingFit } from './meeting-fit';
import type { Separation } from './separation';

export interface TestedMeeting {
  meeting: Meeting;
  separation: Separation;
  fit: MeetingFit;
  pChance: number;
  qValue: number;
}

/** Everything that is published about one meeting, and which criteria it fails. */
export function describeMeeting(
  tracks: Tracks,
  { meeting, separation: s, fit, pChance, qValue }: TestedMeeting,
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
  falseDiscoveryRate: number,
  bothTrapped: boolean,
): ReconnectionCandidate {
  const dtS = conditions.frameInterval_s;
  const { law, flyBy } = fit;
  const sides = sidesOf(s, fit);
  const failed = [...failedByLaw(s, fit), ...failedByExponent(sides)];
  if (!bothTrapped) failed.unshift('A track of the pair is not named trapped.');
  if (!(fit.bicGain > BIC_GAIN_MIN)) failed.push('A straight fly-by describes the points nearly as well.');
  if (!(qValue <= falseDiscoveryRate)) {
    failed.push(
      `Chance meetings of independent tracks look like this too often (q = ${qValue.toPrecision(2)}).`,
    );
  }
  const middle = middleAt(tracks, meeting);
  const um = (square: number) => 1e-6 * Math.sqrt(Math.max(0, square));
  return {
    trackA: meeting.trackA,
    trackB: meeting.trackB,
    t0S: (meeting.frame + law.t0) * dtS,
    t0ErrorS: fit.t0Curvature > 0 ? dtS * Math.sqrt(2 / fit.t0Curvature) : null,
    ...middle,
    minSeparationM: 1e-6 * s.leastUm,
    offsetM: um(law.coefficients[0]),
    ...sides,
    reducedChi2: fit.reducedChi2,
    bicGain: fit.bicGain,
    pChance,
    qValue,
    accepted: failed.length === 0,
    failed,
    series: {
      frame: Array.from(s.frame),
      tS: Array.from(s.frame, (frame) => frame * dtS),
      separationM: Array.from(s.squareUm2, um),
      // The error of delta is that of delta^2 over 2 delta, where delta stands clear of its noise.
      errorM: Array.from(s.noiseUm2, um),
      lawM: Array.from(law.modelUm2, um),
      flyByM: Array.from(flyBy.modelUm2, um),
    },
  };
}

/** Middle of the two tracks in the frame of their meeting, px. */
function middleAt(tracks: Tracks, { trackA, trackB, frame }: Meeting): { xPx: number; yPx: number } {
  const at = (track: number) => tracks.start[track] + frame - tracks.frame[tracks.start[track]];
  const p = at(trackA);
  const q = at(trackB);
  return { xPx: (tracks.xPx[p] + tracks.xPx[q]) / 2, yPx: (tracks.yPx[p] + tracks.yPx[q]) / 2 };
}
