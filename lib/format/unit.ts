/** One piece of a unit or formula in type: plain text, or text raised as an exponent. */
export interface UnitPiece {
  text: string;
  raised: boolean;
}

/**
 * Cuts `mW/cm^2`, `m^-2`, `10^8 m^-2` into plain and raised pieces; the minus of an exponent
 * becomes a real one. Text without `^` comes back as one piece.
 */
export function unitPieces(unit: string): UnitPiece[] {
  const pieces: UnitPiece[] = [];
  let rest = unit;
  while (rest !== '') {
    const match = /\^(-?[\d./]+)/.exec(rest);
    if (!match) {
      pieces.push({ text: rest, raised: false });
      break;
    }
    if (match.index > 0) pieces.push({ text: rest.slice(0, match.index), raised: false });
    pieces.push({ text: match[1].replace('-', '\u2212'), raised: true });
    rest = rest.slice(match.index + match[0].length);
  }
  return pieces;
}

/** A unit as a laboratory writes it, and how many SI units one of it is. */
export interface DisplayUnit {
  unit: string;
  siPerUnit: number;
}

/** Units of screens; values inside the product are SI. */
export const DISPLAY_UNITS = {
  temperature: { unit: 'K', siPerUnit: 1 },
  pressure: { unit: 'kPa', siPerUnit: 1e3 },
  heatFlux: { unit: 'mW/cm^2', siPerUnit: 10 },
  power: { unit: 'mW', siPerUnit: 1e-3 },
  velocity: { unit: 'mm/s', siPerUnit: 1e-3 },
  channelLength: { unit: 'mm', siPerUnit: 1e-3 },
  smallLength: { unit: '\u00b5m', siPerUnit: 1e-6 },
  area: { unit: 'mm^2', siPerUnit: 1e-6 },
  perArea: { unit: 'mm^-2', siPerUnit: 1e6 },
  lineDensity: { unit: '10^8 m^-2', siPerUnit: 1e8 },
  density: { unit: 'kg/m^3', siPerUnit: 1 },
  viscosity: { unit: '\u00b5Pa s', siPerUnit: 1e-6 },
  frameRate: { unit: 'Hz', siPerUnit: 1 },
  exposure: { unit: 'ms', siPerUnit: 1e-3 },
  perVelocity: { unit: 's/mm', siPerUnit: 1e3 },
  separationSquared: { unit: '\u00b5m^2', siPerUnit: 1e-12 },
} as const satisfies Record<string, DisplayUnit>;

export type DisplayUnitName = keyof typeof DISPLAY_UNITS;
