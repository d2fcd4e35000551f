import type { FellowsByLine, UntoldOn } from './fellows';
import { decoratedShare, decoratedSharePower } from './sheet-geometry';

/** Share of the lines in the sheet that are seen, because they carry a tracer long enough to be used. */
export interface SeenLines {
  share: number;
  /** Standard error of its logarithm from not knowing how tracers were left out. */
  doubt: number;
  /** What each line adds to its logarithm by chance. */
  influence(on: UntoldOn): Float64Array;
  /** Standard error from pairs that can't be told, beside that. */
  untoldError: number;
}

/**
 * A line carries a tracer by chance (`decoratedShare`), and short tracks are left out. Were they left out one by
 * one, lines would carry so many fewer; but short tracks are those of lines that pass soon, and go with them. How
 * much of the length of lines is left when lines go as a whole is tracers over tracers per length, of those used
 * over all. The truth lies between, since the ends of a track are its own: the middle of both, ln by ln, and half
 * the distance is as far as it may be off (uniform).
 *
 * @returns null where too few pairs of used tracks are there.
 */
export function seenLines({ all, used }: FellowsByLine, thicknessM: number): SeenLines | null {
  if (!used) return null;
  const usedPart = used.perFrame / all.perFrame;
  const fewer = all.perLengthM * usedPart * thicknessM;
  const asMany = used.perLengthM * thicknessM;
  const oneByOne = decoratedShare(fewer);
  const lengthLeft = Math.min(1, (usedPart * all.perLengthM) / used.perLengthM);
  const lineByLine = decoratedShare(asMany) * lengthLeft;
  const powerFewer = decoratedSharePower(fewer);
  const powerAsMany = decoratedSharePower(asMany);
  const influence = (on: UntoldOn) =>
    all.tracers.map((n, i) => {
      const [m, p, q] = [used.tracers[i], all.pairs[on][i], used.pairs[on][i]];
      // Tracers per length go as P / N; those of all times the used part, and those of the used.
      const byOne = powerFewer * (p - 2 * n + m);
      const byLine = powerAsMany * (q - m) + (p - 2 * n + m) - (q - m);
      return (byOne + byLine) / 2;
    });
  return {
    share: Math.sqrt(oneByOne * lineByLine),
    doubt: Math.abs(Math.log(oneByOne / lineByLine)) / Math.sqrt(12),
    influence,
    untoldError: ((powerFewer + 1) / 2) * all.untoldError,
  };
}
