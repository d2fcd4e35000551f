import { choleskyFactor, choleskySolve } from '../detection/cholesky';

/**
 * Radius of the circle through points by linear least squares of x^2 + y^2 = 2 a x + 2 b y + c (Kåsa, IEEE
 * Trans. Instrum. Meas. 25, 8 (1976)), in the unit of the points.
 *
 * @returns null below 3 points or where they lie on a straight line.
 */
export function fitCircle(points: readonly (readonly [number, number])[]): number | null {
  const n = points.length;
  if (n < 3) return null;
  const mx = points.reduce((sum, p) => sum + p[0], 0) / n;
  const my = points.reduce((sum, p) => sum + p[1], 0) / n;
  const normal = new Float64Array(9);
  const right = new Float64Array(3);
  for (const [px, py] of points) {
    const row = [px - mx, py - my, 1];
    const square = row[0] ** 2 + row[1] ** 2;
    for (let i = 0; i < 3; i++) {
      right[i] += row[i] * square;
      for (let j = 0; j <= i; j++) normal[i * 3 + j] += row[i] * row[j];
    }
  }
  const spread = normal[0] + normal[4];
  if (!choleskyFactor(normal, 3, 3)) return null;
  choleskySolve(normal, 3, 3, right);
  const [a, b] = [right[0] / 2, right[1] / 2];
  const radius = Math.sqrt(right[2] + a * a + b * b);
  // A radius a thousand times the size of the chain is a straight line with rounding errors.
  return Number.isFinite(radius) && radius < 1e3 * Math.sqrt(spread) ? radius : null;
}
