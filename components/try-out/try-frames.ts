/** A try-out looks at no more frames than this. */
export const TRY_FRAMES_MOST = 8;

/** `row`: frames that follow each other, so that short tracks show; `spread`: over the whole recording. */
export type TryChoice = 'row' | 'spread';

/** The frames of a try-out: up to 8 of a recording of `frames`, a row beginning as near to `from` as fits. */
export function tryFrames(choice: TryChoice, from: number, frames: number): number[] {
  const count = Math.min(TRY_FRAMES_MOST, frames);
  if (choice === 'row') {
    const first = Math.max(0, Math.min(Math.round(from), frames - count));
    return Array.from({ length: count }, (_, i) => first + i);
  }
  if (count === 1) return [0];
  return Array.from({ length: count }, (_, i) => Math.round((i * (frames - 1)) / (count - 1)));
}
