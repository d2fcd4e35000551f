import type { Conditions } from '../types';

export type Drive = 'counterflow' | 'coflow' | 'towed-grid' | 'oscillating-grid' | 'none';

export interface Channel {
  shape: 'rectangular' | 'circular';
  /** Width, or the diameter of a circular channel. */
  width_m?: number | null;
  depth_m?: number | null;
  length_m?: number | null;
  /** Its walls in the image: ends x0, y0, x1, y1 of each, px. */
  wallsPx?: [number, number, number, number][] | null;
}

/** What a run says about itself; anything may still be missing while a form is filled in. */
export interface RunConditions extends Omit<Conditions, 'pixelSize_m' | 'frameInterval_s'> {
  pixelSize_m?: number | null;
  frameInterval_s?: number | null;
  drive?: Drive | null;
  pressure_Pa?: number | null;
  heatLeak_W?: number | null;
  channel?: Channel | null;
  /** Unit vector of gravity in image axes. */
  gravityDirection?: [number, number] | null;
  /** Tracers seen per area of the sheet, m^-2, when known or planned. */
  tracersPerArea_m2?: number | null;
}

/** Cross-section of the channel, m^2; null while its sizes are unknown. */
export function channelArea(channel: Channel | null | undefined): number | null {
  const width = channel?.width_m ?? null;
  if (!channel || width === null || !(width > 0)) return null;
  if (channel.shape === 'circular') return (Math.PI / 4) * width * width;
  const depth = channel.depth_m ?? null;
  return depth !== null && depth > 0 ? width * depth : null;
}
