/** Size of what is linked, and how far and how long a link may reach. */
export interface LinkLimits {
  width: number;
  height: number;
  frames: number;
  longestStepPx: number;
  mayVanishFrames: number;
}
