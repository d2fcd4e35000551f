import type { Random } from '../random';

/** An axis-aligned box, m. */
export interface Box {
  low: [number, number, number];
  high: [number, number, number];
}

/** The part of a straight line inside a box: points `point + s direction`, s from `from` to `to`. */
export interface LinePiece {
  point: [number, number, number];
  /** Unit vector. */
  direction: [number, number, number];
  from: number;
  to: number;
}

/**
 * A Poisson process of isotropic straight lines, cut to a box. The mean number of lines through
 * the sphere around the box is L pi R^2 (L S / 4 for any convex body of surface S), each at a
 * uniform place of the disc that it crosses at right angles.
 *
 * @param densityM2 line length per volume, m^-2.
 * @param across unit vector of the image that all lines lie across, in planes; null for isotropic lines.
 */
export function isotropicLines(
  random: Random,
  box: Box,
  densityM2: number,
  across: readonly [number, number] | null = null,
): LinePiece[] {
  const centre = box.low.map((low, a) => (low + box.high[a]) / 2);
  const radius = 0.5 * Math.hypot(...box.low.map((low, a) => box.high[a] - low));
  const count = random.poisson(densityM2 * Math.PI * radius * radius);
  const pieces: LinePiece[] = [];
  for (let i = 0; i < count; i++) {
    const cos = 2 * random.uniform() - 1;
    const sin = Math.sqrt(1 - cos * cos);
    const turn = 2 * Math.PI * random.uniform();
    const direction: [number, number, number] = across
      ? [-across[1] * Math.cos(turn), across[0] * Math.cos(turn), Math.sin(turn)]
      : [sin * Math.cos(turn), sin * Math.sin(turn), cos];
    const r = radius * Math.sqrt(random.uniform());
    const angle = 2 * Math.PI * random.uniform();
    const [e1, e2] = normalsOf(direction);
    const point = centre.map((c, a) => c + r * (Math.cos(angle) * e1[a] + Math.sin(angle) * e2[a]));
    const piece = cutToBox(point as [number, number, number], direction, box);
    if (piece) pieces.push(piece);
  }
  return pieces;
}

/** Two unit vectors at right angles to a unit vector and to each other. */
export function normalsOf(d: readonly number[]): [[number, number, number], [number, number, number]] {
  const helper = Math.abs(d[2]) < 0.9 ? [0, 0, 1] : [1, 0, 0];
  const e1 = cross(d, helper);
  const length = Math.hypot(...e1);
  const unit: [number, number, number] = [e1[0] / length, e1[1] / length, e1[2] / length];
  return [unit, cross(d, unit)];
}

function cross(a: readonly number[], b: readonly number[]): [number, number, number] {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}

function cutToBox(
  point: [number, number, number],
  direction: [number, number, number],
  box: Box,
): LinePiece | null {
  let from = -Infinity;
  let to = Infinity;
  for (let a = 0; a < 3; a++) {
    const s0 = (box.low[a] - point[a]) / direction[a];
    const s1 = (box.high[a] - point[a]) / direction[a];
    if (Number.isNaN(s0) || Number.isNaN(s1)) return null;
    from = Math.max(from, Math.min(s0, s1));
    to = Math.min(to, Math.max(s0, s1));
  }
  return to > from ? { point, direction, from, to } : null;
}
