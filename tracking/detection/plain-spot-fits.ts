import type { PlainPlanes } from '../kernels/kernels';
import { measureElongation, type Elongation } from './elongation';
import { FitWindow } from './fit-window';
import { JOINT_SPOTS_MOST } from './fit-work';
import { JointFit } from './joint-fit';
import { createSecondLook } from './second-look';
import type { SpotFits } from './spot-fits';
import { createSpotPainter } from './spot-painter';

export interface SpotFitsOptions {
  width: number;
  height: number;
  spotSigmaPx: number;
  /** Square of the read noise, electrons^2. */
  readVariance: number;
  /** Boxes of pixels around spots reach so many pixels each way. */
  reach: number;
  /** A fit has converged when no spot moves farther than this, px. */
  stepDonePx: number;
}

/** Joint fits in plain TypeScript, double precision: the oracle of the compiled ones. */
export function createPlainSpotFits(planes: PlainPlanes, options: SpotFitsOptions): SpotFits {
  const { width, height, spotSigmaPx, readVariance, reach, stepDonePx } = options;
  const { electrons, usable, bare, model } = planes;
  const window = new FitWindow();
  const joint = new JointFit(spotSigmaPx, reach, 1, stepDonePx);
  const painter = createSpotPainter(width, height, spotSigmaPx, reach);
  const secondLook = createSecondLook(spotSigmaPx, readVariance);
  const centreX = new Float64Array(JOINT_SPOTS_MOST);
  const centreY = new Float64Array(JOINT_SPOTS_MOST);
  const elongation = new Float64Array(JOINT_SPOTS_MOST);
  const splitX = new Float64Array(JOINT_SPOTS_MOST);
  const splitY = new Float64Array(JOINT_SPOTS_MOST);
  const measured: Elongation = { score: 0, splitX: 0, splitY: 0 };
  const { x, y, n, sx, sy, sn, sigma } = joint;
  const fitted = new Float32Array(width * height);

  /** Expected light of the loaded pixels with the spots of the fit made last; what lies around them is of no meaning. */
  const paintFitted = () => {
    for (let j = 0, k = 0; j < window.height; j++) {
      const row = (window.y0 + j) * width + window.x0;
      for (let i = 0; i < window.width; i++, k++) fitted[row + i] = window.fixed[k] - readVariance;
    }
    for (let k = 0; k < joint.count; k++) painter.paint(fitted, x[k], y[k], n[k], sigma[k]);
    return fitted;
  };

  return {
    x,
    y,
    n,
    sx,
    sy,
    sn,
    elongation,
    splitX,
    splitY,
    centreX,
    centreY,
    sigma,
    clear: () => model.set(bare),
    paint: (xPx, yPx, brightness, sigmaPx) => painter.paint(model, xPx, yPx, brightness, sigmaPx),
    load: (count) =>
      window.load(electrons, model, usable, width, height, readVariance, centreX, centreY, count, reach),
    run(count, offsetSpreadE) {
      joint.count = count;
      joint.offsetSpreadE = offsetSpreadE;
      joint.run(window);
      return joint.converged;
    },
    elongate() {
      for (let k = 0; k < joint.count; k++) {
        measureElongation(joint, window, k, measured);
        elongation[k] = measured.score;
        splitX[k] = measured.splitX;
        splitY[k] = measured.splitY;
      }
    },
    logLikelihood: () => joint.logLikelihood(window),
    significance: () => joint.significance(window),
    look: () => secondLook.strongest(window, paintFitted(), bare, width),
  };
}
