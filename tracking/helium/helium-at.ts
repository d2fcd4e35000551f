import { LAMBDA_POINT_K } from '../units';
import { HE2_TABLE } from './he2-table';
import { pchip, type Curve } from './pchip';

/** Helium II at saturated vapour pressure, SI. */
export interface HeliumProperties {
  temperatureK: number;
  densityKgM3: number;
  /** rho_n / rho. */
  normalFraction: number;
  /** rho_s / rho = 1 - rho_n / rho. */
  superfluidFraction: number;
  normalDensityKgM3: number;
  superfluidDensityKgM3: number;
  entropyJKgK: number;
  specificHeatJKgK: number;
  viscosityPaS: number;
  /** Mutual friction. */
  alpha: number;
  alphaPrime: number;
  secondSoundMS: number;
  vapourPressurePa: number;
  coreParameterM: number;
  /** Relative standard errors (alphaPrime: absolute) of the table and of its interpolation. */
  errors: {
    density: number;
    superfluidFraction: number;
    normalFraction: number;
    entropy: number;
    viscosity: number;
    alpha: number;
    alphaPrimeAbsolute: number;
  };
  /** A plain sentence where the values deserve less trust, else null. */
  warning: string | null;
}

/** No value, and the sentence that says why. */
export interface Refusal {
  refused: string;
}

/** Range of the table, K. Values outside are refused, never extrapolated. */
export const HELIUM_RANGE_K = { low: 1.3, high: 2.15 } as const;
/** Above this the interpolation error reaches 4 % in rho_s and 0.02 in alpha'. */
const CAREFUL_ABOVE_K = 2.1;

const lnT = HE2_TABLE.temperatureK.map(Math.log);
const onLogs = (y: readonly number[]): Curve => {
  const curve = pchip(lnT, y.map(Math.log));
  return (lnTemperature) => Math.exp(curve(lnTemperature));
};
const density = onLogs(HE2_TABLE.densityKgM3);
const normalFraction = onLogs(HE2_TABLE.normalDensityKgM3.map((rhoN, i) => rhoN / HE2_TABLE.densityKgM3[i]));
const entropy = onLogs(HE2_TABLE.entropyJKgK);
const specificHeat = onLogs(HE2_TABLE.specificHeatJKgK);
const viscosityUPaS = onLogs(HE2_TABLE.viscosityUPaS);
const alpha = onLogs(HE2_TABLE.alpha);
const secondSound = onLogs(HE2_TABLE.secondSoundMS);
const vapourPressure = onLogs(HE2_TABLE.vapourPressurePa);
const coreNm = onLogs(HE2_TABLE.coreNm);
const alphaPrime = pchip(lnT, HE2_TABLE.alphaPrime);

/**
 * Properties of helium II at a temperature (K, ITS-90, saturated vapour pressure): monotone cubic
 * interpolation of ln y against ln T (alpha' linearly in y) through the table of Donnelly &
 * Barenghi (1998). Outside 1.30 to 2.15 K and at what is no number, a refusal.
 */
export function heliumAt(temperatureK: number): HeliumProperties | Refusal {
  const refused = refusalAt(temperatureK);
  if (refused !== null) return { refused };
  const at = Math.log(temperatureK);
  const fraction = normalFraction(at);
  const rho = density(at);
  const careful = temperatureK > CAREFUL_ABOVE_K;
  return {
    temperatureK,
    densityKgM3: rho,
    normalFraction: fraction,
    superfluidFraction: 1 - fraction,
    normalDensityKgM3: rho * fraction,
    superfluidDensityKgM3: rho * (1 - fraction),
    entropyJKgK: entropy(at),
    specificHeatJKgK: specificHeat(at),
    viscosityPaS: viscosityUPaS(at) * 1e-6,
    alpha: alpha(at),
    alphaPrime: alphaPrime(at),
    secondSoundMS: secondSound(at),
    vapourPressurePa: vapourPressure(at),
    coreParameterM: coreNm(at) * 1e-9,
    // Data keys of the source for rho_n, rho_s and S; viscosity and friction: value from memory.
    errors: {
      density: 1e-4,
      superfluidFraction: 0.05,
      normalFraction: 0.05,
      entropy: temperatureK < 1.6 ? 0.02 : 0.01,
      viscosity: 0.05,
      alpha: 0.1,
      alphaPrimeAbsolute: 0.05,
    },
    warning: careful
      ? `Above ${CAREFUL_ABOVE_K.toFixed(2)} K the table is steep: interpolation adds up to 4 % to rho_s and 0.02 to alpha'.`
      : null,
  };
}

function refusalAt(temperatureK: number): string | null {
  const { low, high } = HELIUM_RANGE_K;
  const range = `${low.toFixed(2)} to ${high.toFixed(2)} K`;
  if (!Number.isFinite(temperatureK)) return `No temperature is known. Enter ${range}.`;
  const given = `${formatK(temperatureK)} K`;
  if (temperatureK >= LAMBDA_POINT_K) {
    return `${given} is above the lambda point: there is no superfluid. Enter ${range}.`;
  }
  if (temperatureK > high) {
    return `${given} is too near the lambda point (${LAMBDA_POINT_K} K) for the table of helium properties. Enter ${range}.`;
  }
  if (temperatureK < low) {
    return `${given} is below the table of helium properties. Enter ${range}.`;
  }
  return null;
}

/** At least two decimals, as bath temperatures are written. */
function formatK(temperatureK: number): string {
  const text = String(Math.round(temperatureK * 1e4) / 1e4);
  const decimals = text.split('.')[1]?.length ?? 0;
  return decimals < 2 ? temperatureK.toFixed(2) : text;
}

export function isRefusal(value: object): value is Refusal {
  return 'refused' in value;
}
