import { runHeatFlux } from '@/tracking/flow/run-heat-flux';
import type { Conditions } from '@/tracking/types';
import type { Run } from '../run';

/**
 * The conditions that an analysis of a recording of the run is computed with; null while pixel size
 * or frame interval are unknown, without which no length and no velocity can be told. The heat flux
 * is what is left after the heat leak, and nothing where heat does not drive the flow.
 */
export function conditionsOfRun(run: Run): Conditions | null {
  const { pixelSizeM, frameIntervalS } = run;
  if (pixelSizeM === null || frameIntervalS === null) return null;
  const { heatFluxWM2 } = runHeatFlux({
    drive: run.drive,
    heatFlux_W_m2: run.heatFluxWM2,
    heatLeak_W: run.heatLeakW,
    channel: run.channel,
  });
  return {
    pixelSize_m: pixelSizeM,
    frameInterval_s: frameIntervalS,
    exposure_s: run.exposureS,
    sheetThickness_m: run.sheetThicknessM,
    temperature_K: run.temperatureK,
    heatFlux_W_m2: heatFluxWM2,
    flowDirection: run.flowDirection,
    tracer: run.tracer,
    // Only where they were stated: most runs have neither walls nor a calibration of their own.
    ...(run.channel?.wallsPx?.length ? { wallsPx: run.channel.wallsPx } : {}),
    ...(run.gammaSM2 === null ? {} : { gamma_s_m2: run.gammaSM2, v0_m_s: run.v0MS }),
  };
}
