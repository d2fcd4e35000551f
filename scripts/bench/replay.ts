import type { LocalAnalysis } from '@/jobs/local/analyse-stack';

interface Piece {
  cpuS: number;
  /** Pieces that must have ended before. */
  after: readonly Piece[];
}

/**
 * How long an analysis takes with so many workers that wait for nothing but each other: its pieces of work, as long
 * as their processor time, in the order in which they are asked for, each to the worker that is free first. What a
 * clock on the wall would show on idle cores, but for handing over and for memory that workers share.
 */
export function replayedSeconds({ cpuS }: Pick<LocalAnalysis, 'cpuS'>, workers: number): number {
  const piece = (seconds: number, after: readonly Piece[]): Piece => ({ cpuS: seconds, after });
  const [indexS, ...checkS] = cpuS.check;
  const [namingS, ...partsS] = cpuS['measure-flow'];
  const index = piece(indexS, []);
  const image = cpuS['measure-image'].map((seconds) => piece(seconds, [index]));
  const detect = cpuS['detect-spots'].map((seconds) => piece(seconds, image));
  // Asked for behind detection, which waits for the image.
  const check = checkS.map((seconds) => piece(seconds, image));
  const link = cpuS['link-tracks'].map((seconds) => piece(seconds, detect));
  const naming = piece(namingS, link);
  const parts = partsS.map((seconds) => piece(seconds, [naming]));
  return lengthOf([index, ...image, ...detect, ...check, ...link, naming, ...parts], workers);
}

/** End of the last piece; pieces come in an order in which each stands behind those that it waits for. */
function lengthOf(pieces: readonly Piece[], workers: number): number {
  const free = new Array<number>(workers).fill(0);
  const ends = new Map<Piece, number>();
  const waiting = [...pieces];
  while (waiting.length > 0) {
    const readyAt = waiting.map(({ after }) => Math.max(0, ...after.map((one) => ends.get(one) ?? Infinity)));
    const worker = free.indexOf(Math.min(...free));
    // First come, first served, among those that are ready when the worker is; else the one that is ready first.
    const now = Math.max(free[worker], Math.min(...readyAt));
    const next = readyAt.findIndex((at) => at <= now);
    const [one] = waiting.splice(next, 1);
    free[worker] = now + one.cpuS;
    ends.set(one, free[worker]);
  }
  return Math.max(...free);
}
