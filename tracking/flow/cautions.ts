import type { RunConditions } from './run-conditions';
import { isFlammableTracer } from './tracer-density';

export interface Caution {
  code: 'LIQUID_HELIUM' | 'FLAMMABLE_GAS' | 'LASER' | 'PRESSURE_VESSEL';
  title: string;
  detail: string;
}

/**
 * General safety information for a run. Local rules and the laboratory's qualified staff decide;
 * there are no limits, equipment or permissions in it.
 */
export function safetyCautions(run: RunConditions): Caution[] {
  const cautions: Caution[] = [
    {
      code: 'LIQUID_HELIUM',
      title: 'Liquid helium',
      detail:
        'Displaces air (asphyxiation without warning), causes cold burns and expands very strongly on warming: blocked or sealed volumes can burst. Follow your laboratory’s oxygen-deficiency assessment and national guidance; ask the responsible safety person before filling, pumping or venting.',
    },
  ];
  if (isFlammableTracer(run.tracer)) {
    cautions.push({
      code: 'FLAMMABLE_GAS',
      title: 'Hydrogen and deuterium',
      detail:
        'Flammable in air and with solid air, also when diluted and when the tracers evaporate during warm-up. Gas mixing, storage and venting only under your site’s flammable-gas procedure.',
    });
  }
  cautions.push(
    {
      code: 'LASER',
      title: 'Laser sheet',
      detail:
        'Often a class 3B or class 4 source: dangerous to eyes, class 4 also to skin, by diffuse reflections and as an ignition source; windows and cryostat walls reflect. Only under the laser safety officer’s rules.',
    },
    {
      code: 'PRESSURE_VESSEL',
      title: 'Vessels and vacuum windows',
      detail: 'Rated by the laboratory’s responsible engineer.',
    },
  );
  return cautions;
}
