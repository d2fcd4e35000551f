import { createRandom, mixSeed } from '../random';
import { tracerBrightness } from './blink';
import { KIND_TRAPPED } from './scene';
import type { SceneBuilder } from './scene-builder';
import { smoothPath } from './smooth-path';
import type { FilledTangleOptions } from './tangle-options';

/** Pairs that come near each other without reconnecting, by turns. */
const KINDS = ['straight pass', 'pass with a turn', 'stays together'] as const;
const NEAREST_MOST_M = 40e-6;
/** Relative speeds of passes: those of lines that sweep past each other. */
const SPEED_M_S = { low: 0.7e-3, high: 2.5e-3 } as const;
const TURN_S = 0.015;

/** Separation of a pair in a frame, m, and half of it for each tracer. */
type Separation = (sinceS: number) => [x: number, y: number];

/**
 * Pairs of trapped tracers that pass straight, pass with a turn, or stay together: what a search for
 * reconnections must leave alone. Each line of a pair has a number of its own, as those of real pairs.
 */
export function addDecoyPairs(builder: SceneBuilder, o: FilledTangleOptions, seed: number): void {
  const { frames, frameIntervalS: dt, pixelSizeM: px } = o;
  const [low, high] = o.eventSideFrames;
  for (let i = 0; i < o.decoys; i++) {
    const random = createRandom(mixSeed(seed, i + 1));
    const sides = [0, 1].map(() => low + random.integer(high - low + 1));
    const t0 = Math.min(frames, low + Math.max(1, frames - 2 * low) * random.uniform());
    const nearestM = NEAREST_MOST_M * random.uniform();
    const speed = SPEED_M_S.low + (SPEED_M_S.high - SPEED_M_S.low) * random.uniform();
    const angle = 2 * Math.PI * random.uniform();
    const turn = (Math.PI / 3) * (1 + random.uniform());
    const way: Record<(typeof KINDS)[number], Separation> = {
      'straight pass': (t) => [speed * t, nearestM],
      // Comes in along one direction and leaves along another, bent smoothly in between.
      'pass with a turn': (t) => {
        const s = speed * Math.sqrt(t * t + TURN_S * TURN_S) - speed * TURN_S;
        return [s * Math.cos(turn / 2) + nearestM, Math.sign(t) * s * Math.sin(turn / 2)];
      },
      'stays together': () => [nearestM + 2 * px, 0],
    };
    const separation = way[KINDS[i % KINDS.length]];
    const centre = [0.2 + 0.6 * random.uniform(), 0.2 + 0.6 * random.uniform()];
    const path = [0, 1].map(() => smoothPath(random, frames, dt, o.wobbleMPerS, o.wobbleTimeS));
    const k0 = Math.min(Math.round(t0), frames - 1);
    for (const sign of [1, -1]) {
      const xPx = new Float64Array(frames);
      const yPx = new Float64Array(frames);
      const visible = new Uint8Array(frames);
      for (let k = 0; k < frames; k++) {
        const since = (k - t0) * dt;
        const [u, v] = separation(since);
        const drift = o.tangleVelocityMPerS * since;
        const dx = (sign / 2) * (u * Math.cos(angle) - v * Math.sin(angle));
        const dy = (sign / 2) * (u * Math.sin(angle) + v * Math.cos(angle));
        const cx = path[0][k] - path[0][k0] + o.flowDirection[0] * drift;
        const cy = path[1][k] - path[1][k0] + o.flowDirection[1] * drift;
        xPx[k] = centre[0] * o.widthPx + (cx + dx) / px;
        yPx[k] = centre[1] * o.heightPx + (cy + dy) / px;
        visible[k] = k >= t0 - sides[0] && k <= t0 + sides[1] ? 1 : 0;
      }
      const brightness = tracerBrightness(random, o.brightnessE, o.brightnessSpread);
      builder.add(KIND_TRAPPED, -2 - 2 * (o.events + i) - (sign < 0 ? 1 : 0), xPx, yPx, visible, brightness);
    }
  }
}
