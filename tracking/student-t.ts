/**
 * Probability that a Student t variable lies within -t .. t, by the finite series for whole degrees of
 * freedom (Abramowitz & Stegun 26.7.3 and 26.7.4).
 */
export function studentWithin(t: number, degrees: number): number {
  const angle = Math.atan(t / Math.sqrt(degrees));
  const cosine = Math.cos(angle);
  const sine = Math.sin(angle);
  const odd = degrees % 2 === 1;
  if (degrees === 1) return (2 * angle) / Math.PI;
  let term = odd ? cosine : 1;
  let sum = term;
  for (let k = odd ? 3 : 2; k <= degrees - 2; k += 2) {
    term *= ((k - 1) / k) * cosine * cosine;
    sum += term;
  }
  return odd ? (2 / Math.PI) * (angle + sine * sum) : sine * sum;
}

/** Half width, in standard errors, of a two-sided interval; by bisection. */
export function studentHalfWidth(level: number, degrees: number): number {
  let low = 0;
  let high = 1e3;
  for (let i = 0; i < 80; i++) {
    const middle = 0.5 * (low + high);
    if (studentWithin(middle, degrees) < level) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}
