import { numbersColumn, type GrowingColumn } from '../growing-column';
import { keyOfLines } from './by-two-lines';
import type { LineGroups } from './line-groups';

/** Variance of a sum of independent parts. */
export const sumOfSquares = (part: Float64Array): number => part.reduce((sum, of) => sum + of * of, 0);

/**
 * Standard error of a sum of independent parts but for some pairs that may be related: squares and twice
 * the products of those pairs (Conley, J. Econometrics 92, 1 (1999)). Where the products would lower it,
 * it stays that of independent parts.
 *
 * @param part deviations, with mean 0 or of a Poisson process.
 */
export function sumError(part: Float64Array, related: Iterable<readonly [number, number]>): number {
  return Math.sqrt(sumOfSquares(part) + productsOf(part, related));
}

/** What related pairs add to the variance of a sum of parts, never less than nothing. */
export function productsOf(part: Float64Array, related: Iterable<readonly [number, number]>): number {
  let between = 0;
  for (const [a, b] of related) between += part[a] * part[b];
  return 2 * Math.max(0, between);
}

/**
 * Pairs of lines, each once, that may be one: tracks of both come near each other and are too short or too
 * still to be told apart, and no other tracks of the two are.
 */
export function perhapsOneLine({ line, lines, pairs, untold }: LineGroups): Iterable<[number, number]> {
  const apart = numbersColumn();
  for (const m of pairs) if (!m.rigid) apart.push(keyOfLines(line[m.trackA], line[m.trackB], lines));
  const perhaps = numbersColumn();
  for (const m of untold) {
    const [a, b] = [line[m.trackA], line[m.trackB]];
    if (a !== b) perhaps.push(keyOfLines(a, b, lines));
  }
  const [keys, others] = [sorted(perhaps), sorted(apart)];
  return {
    *[Symbol.iterator]() {
      let at = 0;
      for (let i = 0; i < keys.length; i++) {
        if (keys[i] === keys[i - 1]) continue;
        while (others[at] < keys[i]) at++;
        if (others[at] !== keys[i]) yield [Math.floor(keys[i] / lines), keys[i] % lines];
      }
    },
  };
}

const sorted = ({ values, length }: GrowingColumn<Float64Array>) => values.subarray(0, length).sort();

/** Sums what tracks add over the tracks of each line. */
export function byLine(part: Float64Array, groups: Pick<LineGroups, 'line' | 'lines'>): Float64Array {
  const sums = new Float64Array(groups.lines);
  groups.line.forEach((line, track) => {
    if (line >= 0) sums[line] += part[track];
  });
  return sums;
}
