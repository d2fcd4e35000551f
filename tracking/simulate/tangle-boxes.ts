import type { Box } from './isotropic-lines';
import { wavyReach, type WavyLineOptions } from './local-induction/wavy-line';
import { smoothPathReach } from './smooth-path';
import type { FilledTangleOptions } from './tangle-options';

/** Room for bursts beyond the wobble, m. */
const BURST_ROOM_M = 0.2e-3;
/** Laminar flow between plates: 1.5 times the mean on the axis, 0 at the walls. */
export const AXIS_OVER_MEAN = 1.5;

/** The box that lines fill: so much larger than the sheet that their density in it stays the same while they move. */
export function lineBox(o: FilledTangleOptions): Box {
  const durationS = o.frames * o.frameIntervalS;
  const room = smoothPathReach(o.wobbleMPerS, o.wobbleTimeS, durationS) + BURST_ROOM_M;
  return roomyBox(o, room, o.tangleVelocityMPerS * durationS);
}

/** The box that axes of curved lines fill: so much larger than the sheet that bends from outside reach into it as often as others leave it. */
export function curvedBox(o: FilledTangleOptions, waves: WavyLineOptions): Box {
  return roomyBox(o, wavyReach(waves), o.tangleVelocityMPerS * o.frames * o.frameIntervalS);
}

/** The box that free tracers fill, long enough upstream that their number in the sheet stays the same. */
export function freeBox(o: FilledTangleOptions): Box {
  const durationS = o.frames * o.frameIntervalS;
  const room = smoothPathReach(o.freeWobbleMPerS, o.freeWobbleTimeS, durationS);
  return roomyBox(o, room, AXIS_OVER_MEAN * o.vnMPerS * durationS);
}

function roomyBox(o: FilledTangleOptions, roomM: number, travelM: number): Box {
  const travel = [o.flowDirection[0] * travelM, o.flowDirection[1] * travelM];
  const half = o.sheetThicknessM / 2;
  const size = [o.widthPx * o.pixelSizeM, o.heightPx * o.pixelSizeM];
  return {
    low: [-roomM - Math.max(0, travel[0]), -roomM - Math.max(0, travel[1]), -half - roomM],
    high: [size[0] + roomM - Math.min(0, travel[0]), size[1] + roomM - Math.min(0, travel[1]), half + roomM],
  };
}

/** What a scene takes to make, on average. */
export interface SceneLoad {
  lines: number;
  /** Tracers that are followed from frame to frame, most of them out of sight. */
  tracers: number;
}

/** How much a scene takes to make, before it is made. */
export function sceneLoad(o: FilledTangleOptions): SceneLoad {
  const lines = lineBox(o);
  const sides = (box: Box) => box.low.map((low, a) => box.high[a] - low);
  const volume = (box: Box) => sides(box).reduce((product, side) => product * side, 1);
  const radius = 0.5 * Math.hypot(...sides(lines));
  const seen = o.widthPx * o.heightPx * o.pixelSizeM ** 2 * o.sheetThicknessM;
  return {
    lines: o.lineDensityM2 * Math.PI * radius * radius,
    tracers:
      o.lineDensityM2 * o.beadsPerMetre * volume(lines) +
      (o.freeTracersPerFrame / seen) * volume(freeBox(o)) +
      2 * o.events,
  };
}
