import { heliumAt, isRefusal, type HeliumProperties } from '../helium/helium-at';
import { temperatureFromVapourPressure } from '../helium/temperature-from-vapour-pressure';
import { LAMBDA_POINT_K } from '../units';
import type { PlanWarning } from './derived-run';
import type { RunConditions } from './run-conditions';

export interface RunHelium {
  helium: HeliumProperties | null;
  /** Why there are no properties, or where the temperature comes from. */
  reason: string | null;
  warnings: PlanWarning[];
}

/** A thermometer and a pressure gauge that differ by more than this deserve a look (common practice). */
const AGREE_WITHIN_K = 0.01;

/** Helium properties of a run: by its temperature, else by its vapour pressure. */
export function runHelium(run: RunConditions): RunHelium {
  const warnings: PlanWarning[] = [];
  const fromPressure = run.pressure_Pa != null ? temperatureFromVapourPressure(run.pressure_Pa) : null;
  const pressureK = fromPressure && !isRefusal(fromPressure) ? fromPressure.temperatureK : null;
  const temperatureK = run.temperature_K ?? pressureK;
  if (temperatureK === null) {
    const reason =
      fromPressure && isRefusal(fromPressure) ? fromPressure.refused : 'The temperature is missing.';
    return { helium: null, reason, warnings };
  }
  if (
    run.temperature_K != null &&
    pressureK !== null &&
    Math.abs(pressureK - temperatureK) > AGREE_WITHIN_K
  ) {
    warnings.push({
      code: 'TEMPERATURE_AND_PRESSURE_DISAGREE',
      detail: `The vapour pressure belongs to ${pressureK.toFixed(3)} K, the temperature entered is ${temperatureK.toFixed(3)} K. The temperature is used.`,
      field: 'pressure_Pa',
    });
  }
  const field = run.temperature_K != null ? 'temperature_K' : 'pressure_Pa';
  const helium = heliumAt(temperatureK);
  if (isRefusal(helium)) {
    const code = temperatureK >= LAMBDA_POINT_K ? 'ABOVE_LAMBDA_POINT' : 'OUTSIDE_HELIUM_TABLE';
    warnings.push({ code, detail: helium.refused, field });
    return { helium: null, reason: helium.refused, warnings };
  }
  if (helium.warning) warnings.push({ code: 'NEAR_LAMBDA_POINT', detail: helium.warning, field });
  const reason =
    run.temperature_K == null ? `Temperature ${temperatureK.toFixed(4)} K from the vapour pressure.` : null;
  return { helium, reason, warnings };
}
