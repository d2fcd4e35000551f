/** A length to draw beside a picture. */
export interface ScaleBar {
  lengthM: number;
  lengthPx: number;
  label: string;
}

const UNITS = [
  { fromM: 1e-3, perUnit: 1e-3, name: 'mm' },
  { fromM: 0, perUnit: 1e-6, name: 'um' },
] as const;

/**
 * The longest bar of 1, 2 or 5 times a power of ten that fits.
 * @param pixelSizeM metres of the object per pixel of the picture, > 0
 * @param roomPx > 0
 */
export function scaleBar(pixelSizeM: number, roomPx: number): ScaleBar {
  const roomM = pixelSizeM * roomPx;
  const power = 10 ** Math.floor(Math.log10(roomM));
  // The quotient of a whole power of ten can come out a hair too small.
  const factor = [5, 2, 1].find((f) => f * power <= roomM * (1 + 1e-9)) ?? 1;
  const lengthM = factor * power;
  const unit = UNITS.find(({ fromM }) => lengthM >= fromM * (1 - 1e-9))!;
  const label = `${Number((lengthM / unit.perUnit).toPrecision(6))} ${unit.name}`;
  return { lengthM, lengthPx: lengthM / pixelSizeM, label };
}
