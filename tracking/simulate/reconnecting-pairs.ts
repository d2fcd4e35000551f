import { createRandom, mixSeed } from '../random';
import { separationAfter } from '../pairs/square-root-law';
import { tracerBrightness } from './blink';
import { KIND_TRAPPED, type SceneEvent } from './scene';
import type { SceneBuilder } from './scene-builder';
import { smoothPath } from './smooth-path';
import type { FilledTangleOptions } from './tangle-options';

/** Tracers ride beside the nearest points of their lines: separation left at the meeting, m. */
const OFFSET_MAX_M = 4e-6;

/**
 * Pairs of trapped tracers that meet and part with delta = A sqrt(kappa |t - t0|), along one
 * direction before and along another after (Paoletti, Fisher & Lathrop, Physica D 239, 1367
 * (2010)), carried along by a common drift. Each line of a pair has a number of its own below -1.
 */
export function addReconnectingPairs(
  builder: SceneBuilder,
  o: FilledTangleOptions,
  seed: number,
): SceneEvent[] {
  const { frames, frameIntervalS: dt, pixelSizeM: px } = o;
  const events: SceneEvent[] = [];
  const [low, high] = o.eventSideFrames;
  for (let i = 0; i < o.events; i++) {
    const random = createRandom(mixSeed(seed, i + 1));
    const sides = [0, 1].map(() => low + random.integer(high - low + 1));
    const room = Math.max(1, frames - 2 * low);
    const t0Frames = Math.min(frames, low + room * random.uniform());
    const amplitudeBefore = 0.6 + 0.6 * random.uniform();
    const amplitudeAfter = 1 + 1.2 * random.uniform();
    const before = 2 * Math.PI * random.uniform();
    const after = before + Math.PI / 2 + 0.3 * random.normal();
    const offsetM = OFFSET_MAX_M * random.uniform();
    const centre = [0.2 + 0.6 * random.uniform(), 0.2 + 0.6 * random.uniform()];
    const path = [0, 1].map(() => smoothPath(random, frames, dt, o.wobbleMPerS, o.wobbleTimeS));
    const k0 = Math.round(t0Frames);
    const made = [1, -1].map((sign) => {
      const xPx = new Float64Array(frames);
      const yPx = new Float64Array(frames);
      const visible = new Uint8Array(frames);
      for (let k = 0; k < frames; k++) {
        const since = (k - t0Frames) * dt;
        const amplitude = since < 0 ? amplitudeBefore : amplitudeAfter;
        const angle = since < 0 ? before : after;
        const reach = 0.5 * separationAfter(amplitude, since);
        const drift = o.tangleVelocityMPerS * since;
        // The offset lies across the separation, so that delta^2 = offset^2 + A^2 kappa |t - t0|.
        const dx = reach * Math.cos(angle) - 0.5 * offsetM * Math.sin(angle);
        const dy = reach * Math.sin(angle) + 0.5 * offsetM * Math.cos(angle);
        const cx = path[0][k] - path[0][Math.min(k0, frames - 1)] + o.flowDirection[0] * drift;
        const cy = path[1][k] - path[1][Math.min(k0, frames - 1)] + o.flowDirection[1] * drift;
        xPx[k] = centre[0] * o.widthPx + (cx + sign * dx) / px;
        yPx[k] = centre[1] * o.heightPx + (cy + sign * dy) / px;
        visible[k] = k >= t0Frames - sides[0] && k <= t0Frames + sides[1] ? 1 : 0;
      }
      const brightness = tracerBrightness(random, o.brightnessE, o.brightnessSpread);
      return builder.add(KIND_TRAPPED, -2 - 2 * i - (sign < 0 ? 1 : 0), xPx, yPx, visible, brightness);
    });
    if (made[0].length === 1 && made[1].length === 1) {
      events.push({ tracerA: made[0][0], tracerB: made[1][0], t0Frames, amplitudeBefore, amplitudeAfter });
    }
  }
  return events;
}
