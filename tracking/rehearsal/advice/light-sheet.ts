import type { Advice } from '../assessment';
import type { AdviceFacts } from './facts';
import { about, micrometres, milliseconds } from './words';

/** A sheet is a plane to the lines while it is thinner than this part of their spacing. */
const PLANE_SPACINGS = 0.3;
/** Populations and meetings need tracks of about this length (8 positions are judged at least). */
const LIFE_LEAST_FRAMES = 12;

type Facts = Pick<AdviceFacts, 'made' | 'medianLifeFrames' | 'frames'>;

/** Whether the sheet is too thick for methods that take it for a plane, or so thin that tracers are gone at once. */
export function lightSheetAdvice({ made, medianLifeFrames, frames }: Facts): Advice[] {
  const { sheetThicknessM, spacingM, frameIntervalS } = made;
  const advice: Advice[] = [];
  if (spacingM !== null && sheetThicknessM > spacingM) {
    advice.push({
      about: 'light sheet',
      weight: 'change',
      sentence: `The sheet (${micrometres(sheetThicknessM)}) is thicker than the lines are apart (${micrometres(spacingM)}): lines behind each other can't be told apart. A sheet below ${micrometres(PLANE_SPACINGS * spacingM)} would be a plane to them.`,
    });
  } else if (spacingM !== null && sheetThicknessM > PLANE_SPACINGS * spacingM) {
    advice.push({
      about: 'light sheet',
      weight: 'know',
      sentence: `The sheet (${micrometres(sheetThicknessM)}) is ${about(sheetThicknessM / spacingM)} of the line spacing: methods that take it for a plane need less than ${PLANE_SPACINGS} (${micrometres(PLANE_SPACINGS * spacingM)}).`,
    });
  }
  if (medianLifeFrames < Math.min(LIFE_LEAST_FRAMES, 0.5 * frames)) {
    advice.push({
      about: 'light sheet',
      weight: 'change',
      sentence: `Half of the tracers are in sight for ${about(medianLifeFrames)} frames (${milliseconds(medianLifeFrames * frameIntervalS)}) or less, too short to be told trapped or free: a thicker sheet, a larger image or a higher frame rate gives longer tracks.`,
    });
  }
  return advice;
}
