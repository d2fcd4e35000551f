import { createRandom, mixSeed } from '../random';
import { blink, tracerBrightness } from './blink';
import { burstPath } from './burst-path';
import { longestStep, type MovingLine } from './moving-line';
import { isotropicLines, normalsOf } from './isotropic-lines';
import { KIND_TRAPPED } from './scene';
import type { SceneBuilder } from './scene-builder';
import { smoothPath } from './smooth-path';
import { lineBox } from './tangle-boxes';
import type { FilledTangleOptions } from './tangle-options';

/**
 * Isotropic lines that drift with the tangle and wobble as a whole, with trapped tracers along
 * them as a Poisson process. The lines fill a box so much larger than the sheet that the density
 * in it stays the same while they move.
 *
 * @returns the lines where tracers can be caught by them, else nothing.
 */
export function addBeadsOnLines(builder: SceneBuilder, o: FilledTangleOptions, seed: number): MovingLine[] {
  if (o.lineDensityM2 === 0) return [];
  const { frames, frameIntervalS: dt, pixelSizeM: px } = o;
  const drift = [o.flowDirection[0] * o.tangleVelocityMPerS, o.flowDirection[1] * o.tangleVelocityMPerS, 0];
  const half = o.sheetThicknessM / 2;
  const lines = isotropicLines(
    createRandom(seed),
    lineBox(o),
    o.lineDensityM2,
    o.acrossFlow ? o.flowDirection : null,
  );
  const xPx = new Float64Array(frames);
  const yPx = new Float64Array(frames);
  const visible = new Uint8Array(frames);

  const moving: MovingLine[] = [];
  lines.forEach((line, index) => {
    const random = createRandom(mixSeed(seed, index + 1));
    const beads = random.poisson(o.beadsPerMetre * (line.to - line.from));
    if (beads === 0 && o.captureRadiusM === 0) return;
    const path = [0, 1, 2].map(() => smoothPath(random, frames, dt, o.wobbleMPerS, o.wobbleTimeS));
    const jump = burstPath(random, frames, dt, o.burstsPerLineS);
    if (o.captureRadiusM > 0) {
      const shift = [0, 1, 2].map((a) =>
        path[a].map((of, k) => of + drift[a] * k * dt + (a === 0 ? jump.x[k] : a === 1 ? jump.y[k] : 0)),
      );
      moving.push({ line, shift: shift as MovingLine['shift'], longestStepM: longestStep(shift) });
    }
    const [normal] = normalsOf(line.direction);
    const waveNumber = (2 * Math.PI) / o.bendLengthM;
    const phase = 2 * Math.PI * random.uniform();
    const lifeS = o.decayPerS > 0 ? (1 / (1 - random.uniform()) - 1) / o.decayPerS : Infinity;
    for (let b = 0; b < beads; b++) {
      const s = line.from + random.uniform() * (line.to - line.from);
      // A sine of slope `bendSlope` adds only its square / 4 to the length of the line.
      const bend = (o.bendSlope / waveNumber) * Math.sin(waveNumber * s + phase);
      const at = line.point.map((p, a) => p + s * line.direction[a] + bend * normal[a]);
      for (let k = 0; k < frames; k++) {
        xPx[k] = (at[0] + path[0][k] + jump.x[k] + drift[0] * k * dt) / px - 0.5;
        yPx[k] = (at[1] + path[1][k] + jump.y[k] + drift[1] * k * dt) / px - 0.5;
        visible[k] = k * dt < lifeS && Math.abs(at[2] + path[2][k]) < half ? 1 : 0;
      }
      blink(random, visible, o.blinkPerFrame);
      builder.add(
        KIND_TRAPPED,
        index,
        xPx,
        yPx,
        visible,
        tracerBrightness(random, o.brightnessE, o.brightnessSpread),
      );
    }
  });
  return moving;
}
