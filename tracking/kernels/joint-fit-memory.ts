import { JOINT_SPOTS_MOST } from '../detection/fit-work';

// Laid out the same way by `assembly/joint-fit-layout.ts` and `assembly/joint-fit-set-up.ts`.

/** Arrays that callers share with the fits: 8 bytes for each spot. */
export const SHARED_ARRAYS = [
  'x',
  'y',
  'n',
  'sx',
  'sy',
  'sn',
  'elongation',
  'splitX',
  'splitY',
  'centreX',
  'centreY',
  'sigma',
] as const;
export const SHARED_BYTES = 8 * JOINT_SPOTS_MOST;
/** Behind them the strongest peak of the residual: response, x, y, brightness. */
export const PEAK_AT = SHARED_BYTES * SHARED_ARRAYS.length;
/** Settings, matrices and vectors end here. */
const SHARES_AT = 7296;
const WINDOW_ARRAYS = 5;

/** Memory that the fits need, and the most columns and rows that a window has. */
export interface JointFitRoom {
  bytes: number;
  windowMost: number;
}

/** @param apartPx how far neighbours in a group are from each other at most, px. */
export function jointFitRoom(reach: number, tapReach: number, apartPx: number): JointFitRoom {
  const side = 2 * reach + 1;
  const windowMost = 4 * Math.ceil((side + (JOINT_SPOTS_MOST + 1) * apartPx) / 4);
  const shareRoom = 4 * Math.ceil(side / 4) + 4;
  const guards = 2 * (side + 16);
  // The residual in rows with margins, and the same correlated along its rows with margins above and below.
  const noise = windowMost * (2 * windowMost + 4 * tapReach + 8);
  const floats =
    6 * shareRoom * (JOINT_SPOTS_MOST + 1) +
    (tapReach + 8) +
    WINDOW_ARRAYS * (windowMost * windowMost + guards) +
    guards +
    noise;
  return { bytes: SHARES_AT + 4 * floats, windowMost };
}
