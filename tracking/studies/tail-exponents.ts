import { Z95 } from '../normal-tail';
import { createRandom, mixSeed } from '../random';
import { velocityTails } from '../tails/velocity-tails';
import type { Tracks } from '../types';

/** How tails are drawn: sizes of steps, px. */
export interface TailCase {
  exponent: number;
  /** Where the tail begins; steps below it are a Gaussian of a third of that width. */
  fromPx: number;
  /** Share of the steps in the tail. */
  tailShare: number;
  /** Where the tail begins over the noise of a velocity component. */
  fromOverNoise: number;
}

export interface TailFigures extends TailCase {
  trials: number;
  /** Fewest samples of a tail found. */
  tailSamples: number;
  meanExponent: number;
  /** Farthest from the true exponent. */
  worstOff: number;
  /** Share of 95 % intervals that hold the truth, and of tails called a power law. */
  coverage: number;
  /** Half widths of intervals over 1.96 r.m.s. errors: 1 where intervals are as wide as they must be. */
  widthOverError: number;
  namedPowerLaw: number;
}

const TRACKS = 400;
const POINTS = 40;
const CONDITIONS = { pixelSize_m: 1e-5, frameInterval_s: 0.005, flowDirection: null };

/** Tail exponents of the speed of tracks whose steps are drawn one by one, with localization errors. */
export function studyTailExponents(one: TailCase, seeds: readonly number[]): TailFigures {
  const found = seeds.map((seed) => {
    const tracks = drawnTracks(one, seed);
    const tails = velocityTails(tracks, new Uint8Array(TRACKS), CONDITIONS, { lagsFrames: [1], seed });
    const speed = tails.find(
      ({ component, population }) => component === 'speed' && population === 'trapped',
    );
    if (!speed) throw new Error('The tracks have no speed.');
    return speed;
  });
  const off = found.map(({ exponent }) => (exponent ?? Infinity) - one.exponent);
  const holds = found.filter(
    ({ exponentLow, exponentHigh }) =>
      (exponentLow ?? Infinity) <= one.exponent && one.exponent <= (exponentHigh ?? -Infinity),
  );
  return {
    ...one,
    trials: seeds.length,
    tailSamples: Math.min(...found.map((tail) => tail.tailSamples)),
    meanExponent: one.exponent + off.reduce((a, b) => a + b, 0) / off.length,
    worstOff: Math.max(...off.map(Math.abs)),
    coverage: holds.length / seeds.length,
    widthOverError:
      rms(found.map(({ exponentLow, exponentHigh }) => ((exponentHigh ?? 0) - (exponentLow ?? 0)) / 2)) /
      (Z95 * rms(off)),
    namedPowerLaw: found.filter(({ verdict }) => verdict === 'power law').length / seeds.length,
  };
}

const rms = (values: readonly number[]) =>
  Math.sqrt(values.reduce((sum, v) => sum + v * v, 0) / values.length);

function drawnTracks(one: TailCase, seed: number): Tracks {
  const random = createRandom(mixSeed(seed, 91));
  const sigmaPx = one.fromPx / one.fromOverNoise / Math.SQRT2;
  const n = TRACKS * POINTS;
  const tracks: Tracks = {
    count: TRACKS,
    start: Uint32Array.from({ length: TRACKS + 1 }, (_, i) => i * POINTS),
    frame: Uint32Array.from({ length: n }, (_, i) => i % POINTS),
    xPx: new Float32Array(n),
    yPx: new Float32Array(n),
    sxPx: new Float32Array(n).fill(sigmaPx),
    syPx: new Float32Array(n).fill(sigmaPx),
    brightness: new Float32Array(n),
    flags: new Uint8Array(n),
  };
  for (let track = 0; track < TRACKS; track++) {
    let [x, y] = [0, 0];
    for (let k = 0; k < POINTS; k++) {
      const inTail = random.uniform() < one.tailShare;
      // v^-a above v0: v0 (1 - u)^(-1 / (a - 1)).
      const size = inTail
        ? one.fromPx * (1 - random.uniform()) ** (-1 / (one.exponent - 1))
        : Math.min(one.fromPx, (one.fromPx / 3) * Math.hypot(random.normal(), random.normal()));
      const angle = 2 * Math.PI * random.uniform();
      x += size * Math.cos(angle);
      y += size * Math.sin(angle);
      tracks.xPx[track * POINTS + k] = x + sigmaPx * random.normal();
      tracks.yPx[track * POINTS + k] = y + sigmaPx * random.normal();
    }
  }
  return tracks;
}

/** Of a hundred intervals of 95 % fewer hold the truth once in 250 studies. */
const COVERAGE_LEAST = 0.88;
const WIDTH_MOST = 1.5;

/** Intervals that hold the truth as often as they say, and are not much wider than that takes. */
export const keepsTailCoverage = ({ coverage, widthOverError }: TailFigures): boolean =>
  coverage >= COVERAGE_LEAST && widthOverError <= WIDTH_MOST;

/** Within 0.2 of the truth, noise being a seventh of where the tail begins at most. */
export const keepsTailExponent = (figures: TailFigures): boolean =>
  figures.worstOff <= 0.2 && keepsTailCoverage(figures);
