/** Relations between line density L (m^-2), spacing l = L^(-1/2) (m) and what a sheet shows. */

/** Isotropic lines cross a plane L / 2 times per area (Saltykov 1945): L = 2 P_A. */
export function lineDensityFromCrossings(perAreaM2: number): number {
  return 2 * perAreaM2;
}

/** Mean distance to the nearest of points scattered in a plane: 1 / (2 sqrt n) (Clark & Evans 1954). */
export function neighbourDistance(perAreaM2: number): number {
  return 0.5 / Math.sqrt(perAreaM2);
}

/** Standard error of the mean nearest distance of N points: 0.26136 / sqrt(N n) (Clark & Evans 1954). */
export function neighbourDistanceError(points: number, perAreaM2: number): number {
  return 0.26136 / Math.sqrt(points * perAreaM2);
}

/** L = 1 / (2 <r>^2) when the points are where lines cross a thin sheet. */
export function lineDensityFromNeighbourDistance(distanceM: number): number {
  return 1 / (2 * distanceM * distanceM);
}

export function spacingFromDensity(lineDensityM2: number): number {
  return 1 / Math.sqrt(lineDensityM2);
}

/**
 * Thickness in which a tracer is seen in a Gaussian sheet: 2 w sqrt(ln(I0 / Ith) / 2).
 * @param waistM half-width where the light has fallen by e^2, m.
 * @param lightRatio light on the axis over the least light in which the tracer is detected, >= 1.
 */
export function effectiveThickness(waistM: number, lightRatio: number): number {
  return 2 * waistM * Math.sqrt(Math.log(lightRatio) / 2);
}

/** Mean free path of a tracer caught within b of a line: 2 / (pi b L). */
export function freePath(captureRadiusM: number, lineDensityM2: number): number {
  return 2 / (Math.PI * captureRadiusM * lineDensityM2);
}
