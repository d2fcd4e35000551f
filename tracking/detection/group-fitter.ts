import type { FramePlanes } from '../kernels/kernels';
import { JOINT_SPOTS_MOST } from './fit-work';
import { BESIDE_SIGMAS, MERGED_SIGMAS, chanceOfTwo, gainWanted } from './one-or-two';
import { DARK_VARIANCE_E2 } from './second-look';
import { createSpotKernel } from './spot-kernel';
import type { SpotFits } from './spot-fits';
import { createSizeChoice } from './size-choice';
import type { SpotSizes } from './spot-sizes';
import type { SpotTable } from './spot-table';

export interface GroupFitterOptions {
  width: number;
  height: number;
  spotSigmaPx: number;
  readVariance: number;
  /** Sizes that spots may have. */
  sizes: SpotSizes;
  /** The frame at hand. */
  pictures: Pick<FramePlanes, 'bareAt'>;
}

/** A spot of a group whose brightness is not this many standard errors above 0 is dropped. */
const BRIGHTNESS_SIGMAS_LEAST = 3.5;
/** Score of elongation from which two spots are tried in place of one (chance of noise: 2 %). */
const ELONGATION_TRIED = 8;
/** Peaks of the residual from this response on are tried as a spot. */
const RESPONSE_TRIED = 3;
/** Two spots closer than this many spot sizes can't be told from one with a slightly wrong shape. */
const CLOSEST_SIGMAS = 0.9;
/**
 * Of spots that likelihood told apart each may be uncertain, since they share their light and their places
 * hang on each other: what one may lose the other gains.
 */
const TOLD_APART_SIGMAS_LEAST = 1.5;
const TOLD_APART_CLOSEST_SIGMAS = 0.6;

/** Fits groups of neighbouring spots together and asks whether there are more. */
export interface GroupFitter {
  /**
   * @param members numbers of the spots in the table; with `lookTwice`, spots found are added behind.
   * @param aloneLeast twice the log-likelihood that a lone spot must gain over none, 0 if it needn't.
   * @param gainLeast twice the log-likelihood that one more spot must gain.
   * @returns the number of members afterwards.
   */
  fit(
    table: SpotTable,
    members: Int32Array,
    count: number,
    lookTwice: boolean,
    aloneLeast: number,
    gainLeast: number,
  ): number;
  /** How far the background near the spots may be off, electrons r.m.s. per pixel. */
  setOffsetSpread(spreadE: number): void;
}

export function createGroupFitter(options: GroupFitterOptions, joint: SpotFits): GroupFitter {
  const { width, height, spotSigmaPx, readVariance, sizes, pictures } = options;
  const { squares } = createSpotKernel(spotSigmaPx);
  const bestX = new Float64Array(JOINT_SPOTS_MOST);
  const bestY = new Float64Array(JOINT_SPOTS_MOST);
  const bestN = new Float64Array(JOINT_SPOTS_MOST);
  const bestSize = new Uint8Array(JOINT_SPOTS_MOST);
  /** Sizes of the members in the attempt at hand. */
  const size = new Uint8Array(JOINT_SPOTS_MOST);
  const best = { likelihood: -Infinity };
  const widest = { split: -1, splitX: 0, splitY: 0 };
  let offsetSpreadE = 1;

  /** Adds the light of a group to what is expected, or takes it away; that of a spot that nobody sees stays unpainted. */
  const paintAll = (table: SpotTable, members: Int32Array, count: number, sign: number) => {
    for (let k = 0; k < count; k++) {
      const i = members[k];
      if (table.unpainted[i] === 1 && (count === 1 || sign < 0)) continue;
      table.unpainted[i] = 0;
      joint.paint(table.x[i], table.y[i], sign * table.n[i], sizes.sigmaPx[table.size[i]]);
    }
  };

  /** Matched-filter response to a spot by itself, in units of the background's noise. */
  const responseTo = (xPx: number, yPx: number, brightnessE: number) => {
    const x = Math.max(0, Math.min(width - 1, Math.round(xPx)));
    const y = Math.max(0, Math.min(height - 1, Math.round(yPx)));
    const variance = pictures.bareAt(y * width + x) + readVariance + DARK_VARIANCE_E2;
    return (brightnessE * squares) / Math.sqrt(variance);
  };

  const start = (table: SpotTable, members: Int32Array, count: number) => {
    for (let k = 0; k < count; k++) {
      const i = members[k];
      joint.x[k] = table.x[i];
      joint.y[k] = table.y[i];
      joint.n[k] = table.n[i];
      joint.sigma[k] = sizes.sigmaPx[table.size[i]];
      joint.centreX[k] = table.x[i];
      joint.centreY[k] = table.y[i];
    }
  };

  const store = (table: SpotTable, members: Int32Array, count: number) => {
    for (let k = 0; k < count; k++) {
      const i = members[k];
      table.x[i] = joint.x[k];
      table.y[i] = joint.y[k];
      table.n[i] = joint.n[k];
      table.sx[i] = joint.sx[k];
      table.sy[i] = joint.sy[k];
      table.sn[i] = joint.sn[k];
    }
  };

  const chooseSizes = createSizeChoice(joint, sizes, start, store);

  /** Takes out the faintest member that isn't there, if any; true when one went. */
  const dropOne = (table: SpotTable, members: Int32Array, count: number): boolean => {
    let worst = -1;
    let least = BRIGHTNESS_SIGMAS_LEAST;
    for (let k = 0; k < count; k++) {
      const i = members[k];
      let strength = table.n[i] / table.sn[i];
      if (table.toldApart[i] === 1) strength *= BRIGHTNESS_SIGMAS_LEAST / TOLD_APART_SIGMAS_LEAST;
      if (tooCloseToBrighter(table, members, count, k) || !(strength > 0)) strength = 0;
      if (strength < least) {
        least = strength;
        worst = k;
      }
    }
    if (worst < 0) return false;
    table.alive[members[worst]] = 0;
    for (let k = worst; k < count - 1; k++) members[k] = members[k + 1];
    return true;
  };

  const tooCloseToBrighter = (table: SpotTable, members: Int32Array, count: number, k: number) => {
    const i = members[k];
    const closest = table.toldApart[i] === 1 ? TOLD_APART_CLOSEST_SIGMAS : CLOSEST_SIGMAS;
    for (let m = 0; m < count; m++) {
      const j = members[m];
      if (m === k || table.n[j] < table.n[i]) continue;
      if (apart(table.x[i] - table.x[j], table.y[i] - table.y[j]) < closest) return true;
    }
    return false;
  };

  /** Scores of elongation after a fit, and the member that looks most like two. */
  const findWidest = (table: SpotTable, members: Int32Array, count: number) => {
    widest.split = -1;
    joint.elongate();
    let most = ELONGATION_TRIED;
    for (let k = 0; k < count; k++) {
      const i = members[k];
      const score = joint.elongation[k];
      const chance = chanceOfTwo(score);
      table.elongation[i] = score;
      table.doubtX[i] = chance * joint.splitX[k] ** 2;
      table.doubtY[i] = chance * joint.splitY[k] ** 2;
      if (!(score > most)) continue;
      most = score;
      widest.split = k;
      widest.splitX = joint.splitX[k];
      widest.splitY = joint.splitY[k];
    }
  };

  const fitPlain = (table: SpotTable, members: Int32Array, count: number): number => {
    paintAll(table, members, count, -1);
    while (count > 0) {
      start(table, members, count);
      joint.load(count);
      joint.run(count, offsetSpreadE);
      store(table, members, count);
      if (count === 1 || !dropOne(table, members, count)) break;
      count--;
    }
    if (count > 0) chooseSizes(table, members, count, offsetSpreadE);
    findWidest(table, members, count);
    paintAll(table, members, count, 1);
    return count;
  };

  /** Distance in spot sizes. */
  const apart = (dxPx: number, dyPx: number) => Math.sqrt(dxPx * dxPx + dyPx * dyPx) / spotSigmaPx;

  /** Whether the spots of the fit made last are there, each in a place of its own. */
  const areApart = (count: number): boolean => {
    const { x, y, n, sn } = joint;
    for (let k = 0; k < count; k++) {
      if (!(n[k] > TOLD_APART_SIGMAS_LEAST * sn[k])) return false;
      for (let m = 0; m < k; m++) {
        if (apart(x[k] - x[m], y[k] - y[m]) < TOLD_APART_CLOSEST_SIGMAS) return false;
      }
    }
    return true;
  };

  /** Adds the spot of the best fit behind the members and moves those to where they are beside it. */
  const addFound = (table: SpotTable, members: Int32Array, count: number, response: number) => {
    // What was split off an elongated spot left no peak: its response is the one that its light would have.
    const shown = response < RESPONSE_TRIED ? responseTo(bestX[count], bestY[count], bestN[count]) : response;
    const fresh = table.add(bestX[count], bestY[count], bestN[count], shown, sizes.typical);
    table.group[fresh] = table.group[members[0]];
    table.turn[fresh] = table.turn[members[0]];
    table.toldApart[fresh] = 1;
    for (let k = 0; k < count; k++) {
      const i = members[k];
      table.x[i] = bestX[k];
      table.y[i] = bestY[k];
      table.n[i] = bestN[k];
      table.size[i] = bestSize[k];
      if (apart(bestX[k] - bestX[count], bestY[k] - bestY[count]) >= MERGED_SIGMAS) continue;
      table.toldApart[i] = 1;
      table.elongationAsOne[i] = Math.max(table.elongationAsOne[i], table.elongation[i]);
      table.elongationAsOne[fresh] = Math.max(table.elongationAsOne[fresh], table.elongation[i]);
    }
    members[count] = fresh;
  };

  /** Starts from the members as they are and one more of typical size. */
  const startBeside = (table: SpotTable, members: Int32Array, count: number) => {
    start(table, members, count);
    joint.sigma[count] = sizes.sigmaPx[sizes.typical];
    for (let k = 0; k < count; k++) size[k] = table.size[members[k]];
  };

  /**
   * Fits the members and one more as they were put; true when that is likelier than all before, and kept then.
   *
   * @param moreUsual -ln of how rare sizes are that the attempt no longer needs.
   */
  const attempt = (count: number, moreUsual: number): boolean => {
    joint.run(count + 1, offsetSpreadE);
    const likelihood = joint.logLikelihood() + moreUsual;
    if (!(likelihood > best.likelihood && areApart(count + 1))) return false;
    best.likelihood = likelihood;
    bestX.set(joint.x);
    bestY.set(joint.y);
    bestN.set(joint.n);
    bestSize.set(size);
    return true;
  };

  /** Tries one more spot near those fitted; true when the data ask for it. */
  const tryOneMore = (table: SpotTable, members: Int32Array, count: number, gainLeast: number): boolean => {
    const peak = joint.look();
    const { response } = peak;
    const { split, splitX, splitY } = widest;
    if (split < 0 && response < RESPONSE_TRIED) return false;
    const peakX = peak.xPx;
    const peakY = peak.yPx;
    const peakN = peak.brightness;

    // Both likelihoods must come from the same pixels, hence one window for both.
    paintAll(table, members, count, -1);
    start(table, members, count);
    joint.centreX[count] = split >= 0 && response < RESPONSE_TRIED ? table.x[members[split]] + splitX : peakX;
    joint.centreY[count] = split >= 0 && response < RESPONSE_TRIED ? table.y[members[split]] + splitY : peakY;
    joint.load(count + 1);
    joint.run(count, offsetSpreadE);
    const before = joint.logLikelihood();
    let beside = 0;
    for (let k = 0; k < count; k++) {
      const near =
        apart(joint.x[k] - joint.centreX[count], joint.y[k] - joint.centreY[count]) < BESIDE_SIGMAS;
      if (near) beside += joint.n[k];
    }
    const wanted = gainWanted(gainLeast, beside);
    best.likelihood = before + 0.5 * wanted;
    let found = false;
    if (response >= RESPONSE_TRIED) {
      startBeside(table, members, count);
      joint.x[count] = peakX;
      joint.y[count] = peakY;
      joint.n[count] = peakN;
      found = attempt(count, 0);
    }
    if (split >= 0) {
      startBeside(table, members, count);
      // What looked wide may be two of the usual size.
      const moreUsual = sizes.cost[size[split]];
      size[split] = sizes.typical;
      joint.sigma[split] = sizes.sigmaPx[sizes.typical];
      joint.x[count] = joint.x[split] + splitX;
      joint.y[count] = joint.y[split] + splitY;
      joint.x[split] -= splitX;
      joint.y[split] -= splitY;
      joint.n[split] *= 0.5;
      joint.n[count] = joint.n[split];
      found = attempt(count, moreUsual) || found;
    }
    if (found) addFound(table, members, count, response);
    paintAll(table, members, found ? count + 1 : count, 1);
    return found;
  };

  const fit: GroupFitter['fit'] = (table, members, count, lookTwice, aloneLeast, gainLeast) => {
    let now = fitPlain(table, members, count);
    if (now === 1 && aloneLeast > 0 && joint.significance() < aloneLeast) {
      paintAll(table, members, now, -1);
      table.alive[members[0]] = 0;
      return 0;
    }
    while (lookTwice && now > 0 && now < JOINT_SPOTS_MOST) {
      if (!tryOneMore(table, members, now, gainLeast)) break;
      const before = now + 1;
      now = fitPlain(table, members, before);
      if (now < before) break;
    }
    return now;
  };
  const setOffsetSpread = (spreadE: number) => {
    offsetSpreadE = spreadE;
  };
  return { fit, setOffsetSpread };
}
