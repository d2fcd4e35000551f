import type { FlowField } from './flow-field';

/** No velocity is steadier than this. */
export const JITTER_LEAST_PX2 = 0.02 ** 2;

/** How one population of tracers moves. */
export interface PopulationMotion {
  /** Share of all tracers. */
  share: number;
  /** Variance of the change of velocity from frame to frame, px^2, per axis. */
  jitter: number;
  /** Velocity of a tracer before anything is known of it: mean by place, px, and variance per axis, px^2. */
  flow: FlowField;
  startVariance: number;
  /** Share of steps in which a tracer suddenly changes its velocity, and the variance of that change. */
  jumpShare: number;
  jumpVariance: number;
}
