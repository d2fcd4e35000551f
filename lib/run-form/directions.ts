/** Ways across the image, as unit vectors in image axes (x right, y down). */
export const DIRECTIONS = {
  right: [1, 0],
  left: [-1, 0],
  up: [0, -1],
  down: [0, 1],
} as const;
export type DirectionName = keyof typeof DIRECTIONS;

const NEAR = 1e-3;

/** The word for a vector; `angle` for one that is none of the four; empty for none. */
export function directionText(vector: readonly number[] | null | undefined): string {
  if (!vector) return '';
  for (const [name, [x, y]] of Object.entries(DIRECTIONS)) {
    if (Math.hypot(vector[0] - x, vector[1] - y) < NEAR) return name;
  }
  return 'angle';
}

/** Degrees from "right", turning towards "down" as image axes do. */
export const directionAngle = (vector: readonly number[]): number =>
  Number(((Math.atan2(vector[1], vector[0]) * 180) / Math.PI).toFixed(2));

export function directionFromAngle(degrees: number): [number, number] {
  const radians = (degrees * Math.PI) / 180;
  return [Math.cos(radians), Math.sin(radians)];
}
