import { mixSeed } from '../random';
import { addBeadsOnCurvedLines } from './beads-on-curved-lines';
import { addBeadsOnLines } from './beads-on-lines';
import { addDecoyPairs } from './decoy-pairs';
import { addFreeTracers } from './free-tracers';
import { addReconnectingPairs } from './reconnecting-pairs';
import type { Scene } from './scene';
import { SceneBuilder } from './scene-builder';
import { fillTangleOptions, type TangleOptions } from './tangle-options';

/**
 * A vortex tangle seen through a light sheet: beads on isotropic lines of known density that move
 * together, free tracers in a channel flow, pairs that reconnect. The same options and seed give
 * the same scene on every machine.
 */
export function tangleScene(options: TangleOptions): Scene {
  const filled = fillTangleOptions(options);
  const builder = new SceneBuilder(filled.widthPx, filled.heightPx, filled.frames);
  const lines = filled.curved ? [] : addBeadsOnLines(builder, filled, mixSeed(filled.seed, 1));
  if (filled.curved && filled.lineDensityM2 > 0)
    addBeadsOnCurvedLines(builder, filled, filled.curved, mixSeed(filled.seed, 1));
  const captures = addFreeTracers(builder, filled, lines, mixSeed(filled.seed, 2));
  const events = addReconnectingPairs(builder, filled, mixSeed(filled.seed, 3));
  addDecoyPairs(builder, filled, mixSeed(filled.seed, 4));
  return builder.build(filled.lineDensityM2 > 0 ? filled.lineDensityM2 : Number.NaN, events, captures);
}
