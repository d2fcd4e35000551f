/** A picture of bytes red, green, blue, opacity, row by row. */
export interface Canvas {
  width: number;
  height: number;
  data: Uint8Array | Uint8ClampedArray;
}

export type Colour = readonly [red: number, green: number, blue: number];

/** Lays a colour over a pixel; `share` 0..1 of it. */
function blend({ width, height, data }: Canvas, x: number, y: number, colour: Colour, share: number): void {
  if (share <= 0 || x < 0 || y < 0 || x >= width || y >= height) return;
  const at = 4 * (y * width + x);
  for (let k = 0; k < 3; k++) data[at + k] += (colour[k] - data[at + k]) * Math.min(1, share);
}

export interface Ink {
  colour: Colour;
  /** 0..1 */
  opacity?: number;
}

/**
 * A straight line with round ends and soft edges, half as wide as `from` at its start and as `to` at its end, px.
 * Pixels are covered by their distance from the line, so that all slopes look alike.
 */
export function inkLine(
  canvas: Canvas,
  [x0, y0]: readonly [number, number],
  [x1, y1]: readonly [number, number],
  half: { from: number; to: number },
  { colour, opacity = 1 }: Ink,
): void {
  const reach = Math.max(half.from, half.to) + 1;
  const [dx, dy] = [x1 - x0, y1 - y0];
  const length2 = dx * dx + dy * dy;
  for (let y = Math.floor(Math.min(y0, y1) - reach); y <= Math.max(y0, y1) + reach; y++) {
    for (let x = Math.floor(Math.min(x0, x1) - reach); x <= Math.max(x0, x1) + reach; x++) {
      const along = length2 > 0 ? Math.max(0, Math.min(1, ((x - x0) * dx + (y - y0) * dy) / length2)) : 0;
      const distance = Math.hypot(x - x0 - along * dx, y - y0 - along * dy);
      const halfHere = half.from + along * (half.to - half.from);
      const cover = Math.max(0, Math.min(1, halfHere + 0.5 - distance));
      blend(canvas, x, y, colour, cover * opacity);
    }
  }
}

/** A filled disc with a soft edge. */
export const inkDisc = (canvas: Canvas, centre: readonly [number, number], radius: number, ink: Ink): void =>
  inkLine(canvas, centre, centre, { from: radius, to: radius }, ink);
