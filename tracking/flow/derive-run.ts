import type { HeliumProperties } from '../helium/helium-at';
import { safetyCautions } from './cautions';
import { counterflow } from './counterflow';
import {
  known,
  unknown,
  type DerivedEntry,
  type DerivedName,
  type DerivedRun,
  type DerivedValues,
  type PlanWarning,
} from './derived-run';
import { planWarnings } from './plan-warnings';
import type { RunConditions } from './run-conditions';
import { runHeatFlux } from './run-heat-flux';
import { runHelium } from './run-helium';
import { settling } from './settling';
import { GAMMA_RELATIVE_ERROR, gammaAt, steadyLineDensity } from './steady-tangle';
import { tracerDensity } from './tracer-density';

/**
 * What follows from the conditions of a run: helium properties, counterflow velocities, expected
 * line spacing, step per frame and settling, each with its error or the reason why it is unknown;
 * planning warnings and safety cautions. Cheap enough to run at every keystroke.
 */
export function deriveRun(run: RunConditions): DerivedRun {
  const { helium, reason: heliumReason, warnings: heliumWarnings } = runHelium(run);
  const heat = runHeatFlux(run);
  const settled = settlingEntry(run, helium, heliumReason);
  const flow = flowEntries(run, helium, heliumReason, heat);
  const missing = heliumReason ?? 'The temperature is missing.';
  const entries: Record<DerivedName, DerivedEntry> = {
    rhoSRatio: helium
      ? known(
          helium.superfluidFraction,
          '',
          (helium.errors.superfluidFraction * Math.min(helium.normalFraction, helium.superfluidFraction)) /
            helium.superfluidFraction,
          heliumReason,
        )
      : unknown('', missing),
    alpha: helium ? known(helium.alpha, '', helium.errors.alpha) : unknown('', missing),
    ...flow,
    expectedSpacing_m: spacingEntry(run, helium, flow.vns_m_s),
    stepPerFrame_px: stepEntry(run, flow.vn_m_s, flow.vs_m_s),
    settling_m_s: settled.entry,
  };
  const values = Object.fromEntries(
    Object.entries(entries).map(([name, entry]) => [name, entry.value]),
  ) as unknown as DerivedValues;
  return {
    values,
    entries,
    warnings: [...heliumWarnings, ...heat.warnings, ...settled.warnings, ...planWarnings(run, entries)],
    cautions: safetyCautions(run),
  };
}

function flowEntries(
  run: RunConditions,
  helium: HeliumProperties | null,
  heliumReason: string | null,
  heat: ReturnType<typeof runHeatFlux>,
): Pick<Record<DerivedName, DerivedEntry>, 'vn_m_s' | 'vs_m_s' | 'vns_m_s'> {
  if (!helium || heat.heatFluxWM2 === null) {
    const reason = heat.heatFluxWM2 === null ? heat.reason : heliumReason;
    const entry = unknown('m/s', reason ?? 'The temperature is missing.');
    return { vn_m_s: entry, vs_m_s: entry, vns_m_s: entry };
  }
  const flow = counterflow(helium, heat.heatFluxWM2);
  const mean = 'Mean over the cross-section; on the axis of a laminar flow up to 2.1 times as much.';
  return {
    vn_m_s: known(flow.vnMS, 'm/s', flow.vnRelativeError, heat.reason ? `${heat.reason} ${mean}` : mean),
    vs_m_s: known(flow.vsMS, 'm/s', flow.vsRelativeError, heat.reason),
    vns_m_s: known(flow.vnsMS, 'm/s', flow.vnsRelativeError, heat.reason),
  };
}

function spacingEntry(run: RunConditions, helium: HeliumProperties | null, vns: DerivedEntry): DerivedEntry {
  if (vns.value === null || !helium)
    return unknown('m', vns.reason ?? 'The counterflow velocity is unknown.');
  const own = run.gamma_s_m2 ?? null;
  const gamma = own ?? gammaAt(helium.temperatureK);
  if (Number.isNaN(gamma)) {
    return unknown('m', 'No γ is on file at this temperature (1.30 to 1.90 K). Enter your own.');
  }
  const density = steadyLineDensity(gamma, vns.value, run.v0_m_s ?? 0);
  if (density === 0) return unknown('m', 'Below the critical velocity no tangle is expected.');
  const reason = own
    ? 'From √L = γ (v_ns − v₀) with the γ entered.'
    : 'From √L = γ (v_ns − v₀) with a published γ, unverified.';
  return {
    value: 1 / Math.sqrt(density),
    unit: 'm',
    relativeError: Math.hypot(GAMMA_RELATIVE_ERROR, vns.relativeError ?? 0),
    reason,
    unverified: own === null,
  };
}

function stepEntry(run: RunConditions, vn: DerivedEntry, vs: DerivedEntry): DerivedEntry {
  if (vn.value === null || vs.value === null) return unknown('px', vn.reason ?? 'The velocity is unknown.');
  if (!run.pixelSize_m || !run.frameInterval_s) {
    return unknown('px', 'The pixel size or the frame interval is missing.');
  }
  const fastest = Math.abs(vn.value) >= Math.abs(vs.value) ? vn : vs;
  const step = (Math.abs(fastest.value ?? 0) * run.frameInterval_s) / run.pixelSize_m;
  const whose = fastest === vn ? 'normal fluid' : 'superfluid';
  return known(step, 'px', fastest.relativeError, `Step of a tracer that moves with the ${whose}.`);
}

function settlingEntry(
  run: RunConditions,
  helium: HeliumProperties | null,
  heliumReason: string | null,
): { entry: DerivedEntry; warnings: PlanWarning[] } {
  const plain = (reason: string) => ({ entry: unknown('m/s', reason), warnings: [] });
  if (!helium) return plain(heliumReason ?? 'The temperature is missing.');
  const diameterM = run.tracer?.diameter_m;
  if (!diameterM) return plain('The diameter of the tracers is missing.');
  const density = tracerDensity(run.tracer);
  if (!density) return plain('The density of the tracers is missing.');
  const { velocityMS, reynolds } = settling(helium, diameterM, density.densityKgM3);
  if (reynolds >= 1) {
    const detail = `Stokes’ law does not hold for these tracers: their Reynolds number would be ${reynolds.toPrecision(2)}.`;
    return {
      entry: unknown('m/s', detail),
      warnings: [{ code: 'STOKES_LAW_INVALID', detail, field: 'tracer.diameter_m' }],
    };
  }
  const reason = `${velocityMS > 0 ? 'Sinks' : 'Rises'}; ${density.from}.`;
  return { entry: known(velocityMS, 'm/s', null, reason), warnings: [] };
}
