import { FOUND_WITHIN_PX, ISOLATED_PX } from '../assess';
import { matchPoints, nearestNeighbourPx } from '../assess/point-match';
import { lookAtTruth } from '../assess/true-spots';
import { wilsonInterval } from '../populations/wilson';
import type { Spots } from '../types';
import type { BrightnessClass, DetectionAssessment, Share } from './assessment';
import type { RehearsalTruth } from './truth';

const CLASSES = 6;
/** Fewer tracers than this make no class of their own. */
const CLASS_TRACERS_LEAST = 4;
/** Bounds are computed for so many points of a class at most: their mean square is known well enough then. */
const BOUNDS_MOST = 2_000;
const Z95 = 1.959963984540054;

interface Sums {
  points: number;
  found: number;
  isolated: number;
  /** Sums of both axes, px^2. */
  errors: number;
  stated: number;
  residuals: number;
  bounds: number;
  bounded: number;
}

const noSums = (): Sums => ({ points: 0, found: 0, isolated: 0, errors: 0, stated: 0, residuals: 0, bounds: 0, bounded: 0 }); // prettier-ignore

/**
 * What detection made of the truth: found shares by brightness, false spots, errors of isolated
 * points against the Cramer-Rao bound and against the stated ones. Pairs are one to one within 2 px.
 *
 * @param falseAskedPerFrame what the recipe asked for.
 */
export function assessDetection(
  { scene, camera, kind }: RehearsalTruth,
  spots: Spots,
  falseAskedPerFrame: number,
): DetectionAssessment {
  const partner = matchPoints(scene, spots, scene.frames, FOUND_WITHIN_PX);
  const nearest = nearestNeighbourPx(scene, scene.frames);
  const truth = lookAtTruth(scene, camera);
  const brightness = Float64Array.from({ length: scene.tracers }, (_, i) => scene.brightnessE[scene.start[i]]); // prettier-ignore
  const edges = classEdges(brightness);
  const classes = edges.slice(1).map(() => ({ sums: noSums(), tracers: [] as number[][], lightE: 0, snr: 0 })); // prettier-ignore
  const crowdedPx = crowdedDistancePx(camera.spotSigmaPx);
  const all = noSums();
  let missedCrowded = 0;
  for (let i = 0; i < scene.tracers; i++) {
    const own = classes[classOf(brightness[i], edges)];
    let found = 0;
    for (let p = scene.start[i]; p < scene.start[i + 1]; p++) {
      own.lightE += scene.brightnessE[p];
      own.snr += truth.snr(p);
      const j = partner[p];
      if (j < 0) {
        if (nearest[p] <= crowdedPx) missedCrowded++;
        continue;
      }
      found++;
      if (!(nearest[p] > ISOLATED_PX)) continue;
      const dx = spots.xPx[j] - scene.xPx[p];
      const dy = spots.yPx[j] - scene.yPx[p];
      const [sx, sy] = [spots.sxPx[j], spots.syPx[j]];
      own.sums.isolated++;
      own.sums.errors += dx * dx + dy * dy;
      own.sums.stated += sx * sx + sy * sy;
      own.sums.residuals += (dx / sx) ** 2 + (dy / sy) ** 2;
      if (own.sums.bounded >= BOUNDS_MOST) continue;
      const bound = truth.bound(p);
      own.sums.bounds += bound.sxPx ** 2 + bound.syPx ** 2;
      own.sums.bounded++;
    }
    const points = scene.start[i + 1] - scene.start[i];
    own.sums.points += points;
    own.sums.found += found;
    own.tracers.push([found, points]);
  }
  for (const { sums } of classes) {
    for (const name of Object.keys(all) as (keyof Sums)[]) all[name] += sums[name];
  }
  const falseSpots = kind === 'simulated' ? spots.count - all.found : null;
  return {
    truePoints: all.points,
    spots: spots.count,
    found: clusteredShare(classes.flatMap(({ tracers }) => tracers)),
    falseSpots,
    falsePerFrame: falseSpots === null ? null : falseSpots / scene.frames,
    falseAskedPerFrame,
    classes: classes.flatMap(({ sums, tracers, lightE, snr }, c): BrightnessClass[] =>
      sums.points === 0
        ? []
        : [
            {
              lowE: edges[c],
              highE: edges[c + 1],
              meanE: lightE / sums.points,
              snr: snr / sums.points,
              truePoints: sums.points,
              found: clusteredShare(tracers),
              ...errorsOf(sums),
            },
          ],
    ),
    ...errorsOf(all),
    errorOverStated: all.isolated > 0 ? Math.sqrt(all.residuals / (2 * all.isolated)) : null,
    missedCrowded,
  };
}

/** Nearer than this, images of two tracers touch: 5 spot sizes. */
export const crowdedDistancePx = (spotSigmaPx: number): number => 5 * spotSigmaPx;

function errorsOf(sums: Sums): Pick<BrightnessClass, 'isolated' | 'errorPx' | 'boundPx' | 'statedPx'> {
  const rms = (total: number, of: number) => (of > 0 ? Math.sqrt(total / (2 * of)) : null);
  return {
    isolated: sums.isolated,
    errorPx: rms(sums.errors, sums.isolated),
    boundPx: rms(sums.bounds, sums.bounded),
    statedPx: rms(sums.stated, sums.isolated),
  };
}

/** Ends of classes with about as many tracers each; one class where all are alike. */
function classEdges(brightness: Float64Array): number[] {
  const sorted = Float64Array.from(brightness).sort();
  const count = Math.max(1, Math.min(CLASSES, Math.floor(sorted.length / CLASS_TRACERS_LEAST)));
  const edges = Array.from({ length: count + 1 }, (_, c) => sorted[Math.min(sorted.length - 1, Math.floor((c * sorted.length) / count))] ?? 0); // prettier-ignore
  const rising = edges.filter((edge, c) => c === 0 || edge > edges[c - 1]);
  return rising.length > 1 ? rising : [edges[0], edges[0]];
}

function classOf(brightness: number, edges: readonly number[]): number {
  let c = edges.length - 2;
  while (c > 0 && brightness < edges[c]) c--;
  return c;
}

/**
 * Share of points found, with an interval for which a tracer is one thing: the ratio estimator over
 * clusters (Cochran, Sampling Techniques, 1977, value from memory); Wilson's over tracers where all
 * or none were found.
 *
 * @param tracers found points and points, per tracer.
 */
export function clusteredShare(tracers: readonly (readonly number[])[]): Share {
  const sum = (k: 0 | 1) => tracers.reduce((total, tracer) => total + tracer[k], 0);
  const points = sum(1);
  if (points === 0) return { value: Number.NaN, low: 0, high: 1 };
  const value = sum(0) / points;
  const m = tracers.length;
  const squares = tracers.reduce((total, [found, of]) => total + (found - value * of) ** 2, 0);
  const error = m > 1 ? Math.sqrt((squares * m) / (m - 1)) / points : 0;
  if (error === 0) return { value, ...wilsonInterval(value * m, m) };
  return { value, low: Math.max(0, value - Z95 * error), high: Math.min(1, value + Z95 * error) };
}
