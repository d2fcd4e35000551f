import type { PlanWarning } from './derived-run';
import { channelArea, type RunConditions } from './run-conditions';

/** The heat flux that drives the flow, after the heat leak, or why there is none. */
export function runHeatFlux(run: RunConditions): {
  heatFluxWM2: number | null;
  reason: string | null;
  warnings: PlanWarning[];
} {
  const warnings: PlanWarning[] = [];
  const none = (reason: string) => ({ heatFluxWM2: null, reason, warnings });
  if (run.drive && run.drive !== 'counterflow') {
    return none('The flow is not driven by heat, so velocities do not follow from a heat flux.');
  }
  if (run.heatFlux_W_m2 == null) return none('The heat flux is missing.');
  if (!run.heatLeak_W) return { heatFluxWM2: run.heatFlux_W_m2, reason: null, warnings };
  const areaM2 = channelArea(run.channel);
  if (areaM2 === null) {
    warnings.push({
      code: 'HEAT_LEAK_NOT_USED',
      detail: 'The heat leak is not subtracted: the cross-section of the channel is missing.',
      field: 'channel',
    });
    return { heatFluxWM2: run.heatFlux_W_m2, reason: null, warnings };
  }
  const net = run.heatFlux_W_m2 - run.heatLeak_W / areaM2;
  if (net <= 0) {
    warnings.push({
      code: 'HEAT_LEAK_EXCEEDS_FLUX',
      detail: 'The heat leak takes more than the whole heat flux; nothing is left to drive the flow.',
      field: 'heatLeak_W',
    });
    return none('The heat leak takes more than the whole heat flux.');
  }
  return { heatFluxWM2: net, reason: 'After subtracting the heat leak.', warnings };
}
