import { pixelShares } from '../pixel-gaussian';
import { createRandom, mixSeed } from '../random';
import { blurOfPoints, blurSteps } from './motion-blur';
import type { Scene, SceneCamera } from './scene';
import { sheetLight } from './sheet-light';

/** Light farther out than this many spot sizes is below 1e-5 of the spot. */
const SPOT_REACH_SIGMAS = 4.5;

/** Draws a scene frame by frame; frames may be asked for in any order. */
export interface Renderer {
  /** Expected photoelectrons per pixel, without noise; the array is reused by the next call. */
  expected(frameIndex: number): Float32Array;
  /** Camera counts, `width * height` of them, rows from the top. */
  renderFrame(frameIndex: number): Uint16Array;
}

/**
 * A camera in front of a scene: pixel-integrated Gaussian spots on the background of a light
 * sheet, Poisson noise of the photoelectrons, Gaussian read noise, gain, offset, rounding and
 * clipping to the bit depth; with an open shutter spots are drawn out along their way, the true
 * position being that of mid-exposure. The noise depends on the camera's seed and the frame only.
 */
export function createRenderer(scene: Scene, camera: SceneCamera): Renderer {
  const { widthPx: width, heightPx: height } = scene;
  const background = sheetLight(camera, width, height).map((light) => light * camera.backgroundE);
  const pointsOfFrame = indexByFrame(scene);
  const electrons = new Float32Array(width * height);
  const reach = Math.ceil(SPOT_REACH_SIGMAS * camera.spotSigmaPx);
  const side = 2 * reach + 1;
  const sharesX = new Float64Array(side);
  const sharesY = new Float64Array(side);
  const unused = new Float64Array(side);
  const most = 2 ** camera.bitDepth - 1;
  const blur = camera.exposureFrames ? blurOfPoints(scene, camera.exposureFrames) : null;

  const addSpot = (x: number, y: number, brightness: number) => {
    const x0 = Math.round(x) - reach;
    const y0 = Math.round(y) - reach;
    pixelShares(x - x0, camera.spotSigmaPx, side, sharesX, unused, unused, 0);
    pixelShares(y - y0, camera.spotSigmaPx, side, sharesY, unused, unused, 0);
    for (let j = Math.max(0, -y0); j < side && y0 + j < height; j++) {
      const row = (y0 + j) * width + x0;
      const light = brightness * sharesY[j];
      for (let i = Math.max(0, -x0); i < side && x0 + i < width; i++)
        electrons[row + i] += light * sharesX[i];
    }
  };

  const expected = (frameIndex: number) => {
    if (!(frameIndex >= 0 && frameIndex < scene.frames)) {
      throw new RangeError(`The scene has frames 0 to ${scene.frames - 1}. Received ${frameIndex}.`);
    }
    electrons.set(background);
    for (const p of pointsOfFrame[frameIndex]) {
      const steps = blur ? blurSteps(blur, p, camera.spotSigmaPx) : 1;
      for (let step = 0; step < steps; step++) {
        const from = blur ? (step + 0.5) / steps - 0.5 : 0;
        addSpot(
          scene.xPx[p] + (blur ? from * blur.xPx[p] : 0),
          scene.yPx[p] + (blur ? from * blur.yPx[p] : 0),
          scene.brightnessE[p] / steps,
        );
      }
    }
    return electrons;
  };

  const renderFrame = (frameIndex: number) => {
    expected(frameIndex);
    const random = createRandom(mixSeed(camera.seed, frameIndex));
    const counts = new Uint16Array(width * height);
    for (let i = 0; i < counts.length; i++) {
      const e = random.poisson(electrons[i]) + camera.readNoiseE * random.normal();
      const count = Math.round(camera.offsetCounts + camera.gainCountsPerE * e);
      counts[i] = count < 0 ? 0 : count > most ? most : count;
    }
    return counts;
  };
  return { expected, renderFrame };
}

/** Numbers of the scene's points by frame. */
function indexByFrame(scene: Scene): number[][] {
  const byFrame: number[][] = Array.from({ length: scene.frames }, () => []);
  for (let p = 0; p < scene.frame.length; p++) byFrame[scene.frame[p]].push(p);
  return byFrame;
}
