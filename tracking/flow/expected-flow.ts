import { heliumAt, isRefusal } from '../helium/helium-at';
import type { Conditions } from '../types';
import { counterflow, type Counterflow } from './counterflow';

/** Velocities that temperature and heat flux of a recording let expect. */
export interface ExpectedFlow {
  flow: Counterflow;
  temperatureK: number;
  heatFluxWM2: number;
}

/** Counterflow of a recording, or the sentence that says why it can't be known. */
export function expectedFlow(
  conditions: Pick<Conditions, 'temperature_K' | 'heatFlux_W_m2'>,
): ExpectedFlow | { refused: string } {
  const { temperature_K: temperatureK, heatFlux_W_m2: heatFluxWM2 } = conditions;
  if (temperatureK == null) return { refused: 'The temperature is not given.' };
  if (heatFluxWM2 == null) return { refused: 'The heat flux is not given.' };
  const helium = heliumAt(temperatureK);
  if (isRefusal(helium)) return helium;
  return { flow: counterflow(helium, heatFluxWM2), temperatureK, heatFluxWM2 };
}
