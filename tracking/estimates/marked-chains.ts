import { markedLengthPx, type MarkedFrame } from '../corrections/marked-frames';
import type { Conditions } from '../types';
import { chainsInSheet, chordsOfBox, perLengthOf, type Chords } from './chains-in-sheet';
import { ANISOTROPY_ERROR, THICKNESS_ERROR } from './context';
import { RESOLVED_SPOT_SIZES } from './fellows';
import { notUsable, type DensityResult } from './interval';
import { widenForFewLines } from './line-spread';
import { marksAndTracers, type MarkedRecording } from './marks-and-tracers';
import { sumOfSquares } from './shared-motion';

/** Fewer lines than this give no length that an interval could be told of. */
const LINES_LEAST = 8;
/** Where less of the lines lies between tracers, the correction for the rest is larger than what is seen. */
const BETWEEN_LEAST = 0.3;
/** Step of ln r over which slopes are taken. */
const STEP = 0.01;

const NO_MARKS =
  'Nobody has marked lines in this recording: mark all that can be seen in some frames, in the track editor.';

/**
 * L = (4 / pi) times the projected length per volume of the sheet of the lines that people marked, from the first
 * tracer of each to its last, for isotropic lines (a unit length shows as pi / 4 on average); what lies beyond the
 * outermost tracers, also where the edge of the image cuts it, lines with fewer than two, and marks so short that not
 * every tracer of theirs may be seen as one are left out and added by the tracers per marked length, see `chainsInSheet`.
 * Only frames count of which somebody said that they are complete.
 *
 * Lines come as a Poisson process, each with the length and the tracers of it that were seen; chance enters by the
 * length and by the share that is added, so each line's part is that of the two together, and the variance of the
 * sum is the sum of squares.
 */
export function markedChainsEstimate(
  marks: readonly MarkedFrame[],
  recording: MarkedRecording & { conditions: Conditions },
): DensityResult {
  const method = 'marked-chains';
  const { image, conditions } = recording;
  const { sheetThickness_m: h, pixelSize_m: px } = conditions;
  const frames = marks.filter(({ complete }) => complete);
  if (marks.length === 0) return notUsable(method, NO_MARKS);
  const inputs = {
    completeFrames: { value: frames.length, unit: '' },
    sheetThickness: { value: h ?? null, unit: 'm' },
  };
  if (frames.length === 0) {
    const lines = marks.reduce((sum, frame) => sum + frame.lines.length, 0);
    const said = lines === 1 ? 'One line is marked' : `${lines} lines are marked`;
    return notUsable(method, `${said}, but of no frame it is said that all its lines are.`, inputs);
  }
  const shortestPx = RESOLVED_SPOT_SIZES * recording.spotSizePx;
  const seen = frames.map(({ lines, ...frame }) => ({
    ...frame,
    lines: lines.filter((points) => markedLengthPx(points) >= shortestPx),
  }));
  const { lengthPx, tracers } = marksAndTracers(seen, recording);
  const [lengthSumPx, tracerSum] = [sum(lengthPx), sum(tracers)];
  const perAreaPerM = lengthSumPx / frames.length / (image.width * image.height * px);
  const filled = {
    ...inputs,
    lines: { value: lengthPx.length, unit: '' },
    markedLengthPerArea: { value: perAreaPerM, unit: 'm^-1' },
  };
  if (lengthPx.length < LINES_LEAST) {
    const lines = lengthPx.length === 1 ? 'one line is' : `${lengthPx.length} lines are`;
    return notUsable(method, `Only ${lines} marked in complete frames; ${LINES_LEAST} are needed.`, filled);
  }
  if (!h) return notUsable(method, 'The thickness of the light sheet is not given.', filled);
  const markedM2 = ((4 / Math.PI) * perAreaPerM) / h;
  if (!(tracerSum > 0)) {
    return notUsable(method, 'No trapped tracer lies on the marked lines.', filled, markedM2);
  }
  const filmed = (thicknessM: number) => chordsOfBox(image.width * px, image.height * px, thicknessM);
  const chords = filmed(h);
  const shortestM = shortestPx * px;
  const chainTracersPerM = tracerSum / (lengthSumPx * px);
  const perLengthM = perLengthOf(chords, chainTracersPerM, shortestM);
  const { shareBetween, slope } = slopesAt(chords, perLengthM, shortestM);
  const all = {
    ...filled,
    markedDensity: { value: markedM2, unit: 'm^-2' },
    tracersPerLength: { value: perLengthM, unit: 'm^-1' },
    shareBetweenTracers: { value: shareBetween, unit: '' },
  };
  const percent = Math.round(100 * shareBetween);
  if (shareBetween < BETWEEN_LEAST) {
    const note = `Only ${percent} % of a line lies between its outermost tracers, too little to go by; low is what was marked.`;
    return notUsable(method, note, all, markedM2);
  }
  // d ln L = d ln(length) - slope d ln(tracers / length).
  const part = lengthPx.map(
    (length, line) => (1 + slope) * (length / lengthSumPx) - slope * (tracers[line] / tracerSum),
  );
  const weight = lengthPx.map((length) => length / lengthSumPx);
  const thicker = filmed(h * (1 + THICKNESS_ERROR));
  const perLengthThicker = perLengthOf(thicker, chainTracersPerM, shortestM);
  const shareThicker = chainsInSheet(thicker, perLengthThicker, shortestM).shareBetween;
  return {
    method,
    valueM2: markedM2 / shareBetween,
    statistical: widenForFewLines(Math.sqrt(sumOfSquares(part)), weight),
    systematic: Math.hypot(ANISOTROPY_ERROR, Math.log((shareThicker * (1 + THICKNESS_ERROR)) / shareBetween)),
    inputs: all,
    note: `Length of the lines that people marked from first tracer to last, in ${frames.length === 1 ? 'one frame' : `${frames.length} frames`}; what lies beyond is added (${percent} % lies between). Marks drawn further give too much.`,
  };
}

/** The share between tracers, and how its logarithm goes with that of tracers per marked length. */
function slopesAt(
  chords: Chords,
  perLengthM: number,
  shortestM: number,
): { shareBetween: number; slope: number } {
  const [low, at, high] = [-1, 0, 1].map((k) =>
    chainsInSheet(chords, perLengthM * Math.exp(k * STEP), shortestM),
  );
  const ofShare = Math.log(high.shareBetween / low.shareBetween);
  const ofTracers = Math.log(high.tracersPerLengthM / low.tracersPerLengthM);
  return { shareBetween: at.shareBetween, slope: ofShare / ofTracers };
}

const sum = (values: Float64Array): number => values.reduce((a, b) => a + b, 0);
