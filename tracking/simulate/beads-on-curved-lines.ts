import { createRandom, mixSeed } from '../random';
import { blink, tracerBrightness } from './blink';
import { isotropicLines } from './isotropic-lines';
import { advanceFilament } from './local-induction/advance-filament';
import { inductionBeta, type Filament } from './local-induction/filament';
import { filamentRuler } from './local-induction/points-along';
import { wavyLine, wavyStretch, type WavyLineOptions } from './local-induction/wavy-line';
import { KIND_TRAPPED } from './scene';
import type { SceneBuilder } from './scene-builder';
import { curvedBox } from './tangle-boxes';
import type { FilledTangleOptions } from './tangle-options';

/** Time that lines move before they are filmed, s: waves that were put together at random have parted by then. */
export const SETTLING_S = 0.3;
/** Waves before a line repeats itself, at least. */
const WAVES_LEAST = 4;

/**
 * Isotropic lines that bend and move by their own curvature alone (local induction), drifting with the
 * tangle, with trapped tracers along them as a Poisson process. Local induction keeps the length between
 * any two tracers, so each stays at its share of the length and the line density stays what it is.
 */
export function addBeadsOnCurvedLines(
  builder: SceneBuilder,
  o: FilledTangleOptions,
  waves: WavyLineOptions,
  seed: number,
): void {
  const { frames, frameIntervalS: dt, pixelSizeM: px } = o;
  const betaM2S = inductionBeta(1 / Math.sqrt(o.lineDensityM2));
  const drift = [o.flowDirection[0] * o.tangleVelocityMPerS, o.flowDirection[1] * o.tangleVelocityMPerS];
  const half = o.sheetThicknessM / 2;
  const axes = isotropicLines(
    createRandom(seed),
    curvedBox(o, waves),
    o.lineDensityM2 / wavyStretch(waves.slope),
    o.acrossFlow ? o.flowDirection : null,
  );
  const at = new Float64Array(3);
  axes.forEach((axis, index) => {
    const random = createRandom(mixSeed(seed, index + 1));
    const start = axis.point.map((p, a) => p + axis.from * axis.direction[a]) as [number, number, number];
    const lengthM = Math.max(axis.to - axis.from, WAVES_LEAST * waves.waveM);
    const made = wavyLine(random, start, axis.direction, lengthM, waves);
    const wholeM = filamentRuler(made).lengthM;
    // Only what stands on the piece of the axis within the box belongs to the process.
    const beads = random.poisson((o.beadsPerMetre * wholeM * (axis.to - axis.from)) / lengthM);
    if (beads === 0) return;
    let line: Filament = advanceFilament(made, { betaM2S }, SETTLING_S);
    const share = Float64Array.from(
      { length: beads },
      () => (random.uniform() * (axis.to - axis.from)) / lengthM,
    );
    const paths = Array.from({ length: beads }, () => ({
      xPx: new Float64Array(frames),
      yPx: new Float64Array(frames),
      visible: new Uint8Array(frames),
    }));
    for (let k = 0; k < frames; k++) {
      if (k > 0) line = advanceFilament(line, { betaM2S }, dt);
      const ruler = filamentRuler(line);
      paths.forEach(({ xPx, yPx, visible }, b) => {
        ruler.placeAt(share[b], at);
        xPx[k] = (at[0] + drift[0] * k * dt) / px - 0.5;
        yPx[k] = (at[1] + drift[1] * k * dt) / px - 0.5;
        visible[k] = Math.abs(at[2]) < half ? 1 : 0;
      });
    }
    for (const { xPx, yPx, visible } of paths) {
      blink(random, visible, o.blinkPerFrame);
      const brightness = tracerBrightness(random, o.brightnessE, o.brightnessSpread);
      builder.add(KIND_TRAPPED, index, xPx, yPx, visible, brightness);
    }
  });
}
