import type { PairMotion } from './pair-motion';

/** The pair of lines that two tracers are on, as one number, whichever comes first. */
export const keyOfLines = (a: number, b: number, lines: number): number =>
  Math.min(a, b) * lines + Math.max(a, b);

/**
 * Sums over pairs of tracers by the two lines that they are on: all pairs of tracers of the same two lines say
 * the same again, so only these sums are independent of each other.
 */
export class SumsByTwoLines {
  private readonly sums = new Map<number, number>();
  private readonly lines: number;

  /** @param line of each track. */
  constructor(private readonly line: Int32Array) {
    this.lines = line.reduce((most, of) => Math.max(most, of), -1) + 1;
  }

  add({ trackA, trackB }: Pick<PairMotion, 'trackA' | 'trackB'>, value: number): void {
    const key = keyOfLines(this.line[trackA], this.line[trackB], this.lines);
    this.sums.set(key, (this.sums.get(key) ?? 0) + value);
  }

  /** Standard error of what was added, if its mean is 0 for two lines that know nothing of each other. */
  error(): number {
    let square = 0;
    for (const sum of this.sums.values()) square += sum * sum;
    return Math.sqrt(square);
  }
}
