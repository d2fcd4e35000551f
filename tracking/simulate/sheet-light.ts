import type { SceneCamera } from './scene';

/** Ripples across the width of the image. */
const RIPPLES = 3;

/**
 * Relative light of the sheet, 1 in its brightest row: a Gaussian across y that has fallen to
 * `sheetEdgeLight` at the top and the bottom, times a slow ripple along x. Length width * height.
 */
export function sheetLight(
  camera: Pick<SceneCamera, 'sheetEdgeLight' | 'ripple'>,
  widthPx: number,
  heightPx: number,
): Float32Array {
  const light = new Float32Array(widthPx * heightPx);
  const fall = Math.log(1 / Math.min(1, Math.max(1e-6, camera.sheetEdgeLight)));
  for (let y = 0; y < heightPx; y++) {
    const fromMiddle = (2 * (y + 0.5)) / heightPx - 1;
    const across = Math.exp(-fall * fromMiddle * fromMiddle);
    for (let x = 0; x < widthPx; x++) {
      const ripple = 1 + camera.ripple * Math.cos((2 * Math.PI * RIPPLES * (x + 0.5)) / widthPx);
      light[y * widthPx + x] = (across * ripple) / (1 + camera.ripple);
    }
  }
  return light;
}
