import { DISPLAY_UNITS } from './format/unit';

interface ShownConditions {
  temperature_K?: number | null;
  heatFlux_W_m2?: number | null;
  frameInterval_s?: number | null;
  pixelSize_m?: number | null;
}

/** Conditions in one line: `1.85 K, 100 mW/cm², 200 Hz, 6.5 µm/px`; what is not known is left out. */
export function conditionsWords(conditions: ShownConditions): string {
  const words: string[] = [];
  const add = (value: number | null | undefined, unit: string, siPerUnit: number) => {
    // Entered values: four digits say all that was typed, zeros at the end nothing.
    if (typeof value === 'number') words.push(`${Number((value / siPerUnit).toPrecision(4))} ${unit}`);
  };
  add(conditions.temperature_K, 'K', 1);
  add(conditions.heatFlux_W_m2, 'mW/cm²', DISPLAY_UNITS.heatFlux.siPerUnit);
  add(conditions.frameInterval_s ? 1 / conditions.frameInterval_s : null, 'Hz', 1);
  add(conditions.pixelSize_m, 'µm/px', DISPLAY_UNITS.smallLength.siPerUnit);
  return words.join(', ');
}
