import { flowAt, type FlowField } from './flow-field';
import type { LinkLimits } from './link-limits';
import { measureFlowField } from './measure-flow-field';
import type { MotionPieces } from './motion-pieces';
import { JITTER_LEAST_PX2, type PopulationMotion } from './population-motion';

const ROUNDS = 6;
/** A second population has eight numbers of its own: that is the price by Schwarz's criterion. */
const NUMBERS = 8;
/** Pieces for two populations to be told apart, and the least share that either may have. */
const PIECES_LEAST = 60;
const SHARE_LEAST = 0.08;
const JUMP_SHARE_LEAST = 0.005;
const JUMP_SHARE_MOST = 0.25;
/** Neighbouring second differences share positions: together they say about half of what they seem to. */
const TEMPER = 0.5;
/**
 * A second difference shows half of a random change of velocity: it is the mean of two that follow each
 * other, since velocity changes evenly between two frames.
 */
const SEEN = 0.5;
/** Velocity of no piece is known better than this, px. */
const VELOCITY_LEAST_PX = 0.05;

/** One population while it is fitted. */
interface Fitted extends PopulationMotion {
  /** Variance per axis of the pieces' mean velocities about the flow, px^2. */
  meanVariance: number;
}

/**
 * One or two populations of tracers with their own flow, process noise and jumps, as a mixture over
 * pieces of tracks by expectation and maximization (Dempster, Laird & Rubin, J. R. Stat. Soc. B 39, 1
 * (1977)). Two are kept where they explain the pieces so much better that Schwarz's criterion (Ann.
 * Stat. 6, 461 (1978)) pays for them.
 *
 * @param most populations that are looked for.
 * @param usual what all pieces together show; the answer for one population but for its flow.
 */
export function motionPopulations(
  pieces: MotionPieces,
  usual: PopulationMotion,
  limits: LinkLimits,
  most: 1 | 2,
): PopulationMotion[] {
  const all = new Float64Array(pieces.count).fill(1);
  const flow = measureFlowField(pieces, all, limits);
  const meanVariance = Math.max(VELOCITY_LEAST_PX ** 2, velocityVariance(pieces, all, flow));
  const one: Fitted = { ...usual, flow, meanVariance };
  const single: PopulationMotion = { ...usual, flow, startVariance: startVarianceOf(pieces, all, one) };
  if (most === 1 || pieces.count < PIECES_LEAST) return [single];

  const alone = refine(pieces, [one], limits);
  const fast = { ...one, share: 0.5, jitter: 0.5 * usual.jitter };
  const slow = { ...one, share: 0.5, jitter: 2 * usual.jitter };
  // The faster half of the pieces against the slower one is where to begin from.
  const order = Array.from({ length: pieces.count }, (_, i) => Math.hypot(pieces.vx[i], pieces.vy[i]));
  const middle = [...order].sort((a, b) => a - b)[pieces.count >> 1];
  const begin = Float64Array.from(order, (speed) => (speed > middle ? 0.8 : 0.2));
  const pair = refine(pieces, [fast, slow], limits, begin);
  const price = NUMBERS * 0.5 * Math.log(pieces.count);
  const told = pair.logLikelihood - alone.logLikelihood > price;
  if (!told || pair.fitted.some(({ share }) => share < SHARE_LEAST)) return [single];
  return pair.fitted.map(({ meanVariance: _, ...population }) => ({
    ...population,
    // Spots that were two tracers in one are off by more than tracers jump, whichever they are of.
    jumpVariance: Math.max(usual.jumpVariance, population.jumpVariance),
  }));
}

function refine(
  pieces: MotionPieces,
  from: Fitted[],
  limits: LinkLimits,
  begin?: Float64Array,
): { fitted: Fitted[]; logLikelihood: number } {
  let fitted = from;
  const { count } = pieces;
  const weights = from.map((_, k) =>
    Float64Array.from({ length: count }, (_, i) => (begin ? (k === 0 ? begin[i] : 1 - begin[i]) : 1)),
  );
  // Where to begin from says who is in which population; that fits the populations first.
  if (begin) fitted = fitted.map((population, k) => maximize(pieces, population, weights[k], limits));
  let logLikelihood = -Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    logLikelihood = expect(pieces, fitted, weights);
    fitted = fitted.map((population, k) => maximize(pieces, population, weights[k], limits));
  }
  return { fitted, logLikelihood };
}

/** Writes to `weights` how probably each piece is of each population; returns the ln of the likelihood. */
function expect(pieces: MotionPieces, populations: Fitted[], weights: Float64Array[]): number {
  let sum = 0;
  for (let i = 0; i < pieces.count; i++) {
    let most = -Infinity;
    for (let k = 0; k < populations.length; k++) {
      weights[k][i] = Math.log(populations[k].share) + lnLikelihood(pieces, i, populations[k]);
      most = Math.max(most, weights[k][i]);
    }
    let total = 0;
    for (const weight of weights) total += weight[i] = Math.exp(weight[i] - most);
    for (const weight of weights) weight[i] /= total;
    sum += most + Math.log(total);
  }
  return sum;
}

const flowHere = new Float64Array(2);

/** Ln likelihood of a piece's mean velocity and changes, without the 2 pi that all have. */
function lnLikelihood(pieces: MotionPieces, i: number, population: Fitted): number {
  const { flow, meanVariance, jitter, jumpShare, jumpVariance } = population;
  flowAt(flow, pieces.xPx[i], pieces.yPx[i], flowHere);
  const dx = pieces.vx[i] - flowHere[0];
  const dy = pieces.vy[i] - flowHere[1];
  let ln = (-0.5 * (dx * dx + dy * dy)) / meanVariance - Math.log(meanVariance);
  // Products of a few densities at a time spare most logarithms.
  let product = 1;
  let changes = 0;
  for (let c = pieces.start[i]; c < pieces.start[i + 1]; c++) {
    const square = pieces.change[c] * pieces.change[c];
    const narrow = SEEN * jitter + pieces.noise[c];
    const wide = jumpVariance + narrow;
    product *=
      ((1 - jumpShare) * Math.exp((-0.5 * square) / narrow)) / Math.sqrt(narrow) +
      (jumpShare * Math.exp((-0.5 * square) / wide)) / Math.sqrt(wide) +
      1e-30;
    if (product < 1e-200 || product > 1e200) {
      changes += Math.log(product);
      product = 1;
    }
  }
  ln += TEMPER * (changes + Math.log(product));
  return ln;
}

/** The population that the pieces with their weights show. */
function maximize(
  pieces: MotionPieces,
  population: Fitted,
  weight: Float64Array,
  limits: LinkLimits,
): Fitted {
  const { jitter, jumpShare, jumpVariance } = population;
  let total = 0;
  let changes = 0;
  let jumps = 0;
  let plainSquares = 0;
  let jumpSquares = 0;
  for (let i = 0; i < pieces.count; i++) {
    total += weight[i];
    if (weight[i] < 1e-3) continue;
    for (let c = pieces.start[i]; c < pieces.start[i + 1]; c++) {
      const square = pieces.change[c] * pieces.change[c];
      const narrow = SEEN * jitter + pieces.noise[c];
      const wide = jumpVariance + narrow;
      const plain = ((1 - jumpShare) * Math.exp((-0.5 * square) / narrow)) / Math.sqrt(narrow);
      const jumped = (jumpShare * Math.exp((-0.5 * square) / wide)) / Math.sqrt(wide);
      const isJump = weight[i] * (plain + jumped > 0 ? jumped / (plain + jumped) : 1);
      changes += weight[i];
      jumps += isJump;
      plainSquares += (weight[i] - isJump) * (square - pieces.noise[c]);
      jumpSquares += isJump * (square - pieces.noise[c]);
    }
  }
  const flow = measureFlowField(pieces, weight, limits);
  const spread = velocityVariance(pieces, weight, flow);
  const next: Fitted = {
    ...population,
    share: Math.max(1e-6, total / pieces.count),
    flow,
    meanVariance: Math.max(VELOCITY_LEAST_PX ** 2, spread),
    jitter: Math.max(JITTER_LEAST_PX2, plainSquares / Math.max(1e-9, changes - jumps) / SEEN),
    jumpShare: Math.min(JUMP_SHARE_MOST, Math.max(JUMP_SHARE_LEAST, jumps / Math.max(1e-9, changes))),
  };
  const widest = (limits.longestStepPx / 2.5) ** 2;
  const jump = jumpSquares / Math.max(1e-9, jumps) - SEEN * next.jitter;
  next.jumpVariance = Math.min(widest, Math.max(12 * SEEN * next.jitter, jump));
  next.startVariance = startVarianceOf(pieces, weight, next);
  return next;
}

/** Weighted mean square of the pieces' velocities about a flow, per axis. */
function velocityVariance(pieces: MotionPieces, weight: Float64Array, flow: FlowField): number {
  let squares = 0;
  let total = 0;
  for (let i = 0; i < pieces.count; i++) {
    flowAt(flow, pieces.xPx[i], pieces.yPx[i], flowHere);
    const dx = pieces.vx[i] - flowHere[0];
    const dy = pieces.vy[i] - flowHere[1];
    squares += weight[i] * 0.5 * (dx * dx + dy * dy);
    total += weight[i];
  }
  return squares / Math.max(1e-9, total);
}

/** Variance of single steps about the flow: that of the means and that within each piece. */
function startVarianceOf(pieces: MotionPieces, weight: Float64Array, population: Fitted): number {
  let squares = 0;
  let total = 0;
  for (let i = 0; i < pieces.count; i++) {
    squares += weight[i] * pieces.stepVariance[i];
    total += weight[i];
  }
  return Math.max(population.jitter, population.meanVariance + squares / Math.max(1e-9, total));
}
