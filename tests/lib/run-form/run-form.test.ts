import { describe, expect, it } from 'vitest';
import { expectWithin } from '../../helpers/expect-within';
import { parseNumber } from '@/lib/run-form/parse-number';
import { readRunForm, runForm, withUnit } from '@/lib/run-form/run-form';
import { runConditionsSchema, type RunConditionsInput } from '@/lib/schemas/conditions';

const run: RunConditionsInput = {
  pixelSize_m: 6.5e-6,
  frameInterval_s: 1 / 120,
  exposure_s: 1e-3,
  sheetThickness_m: 2e-4,
  temperature_K: 1.85,
  pressure_Pa: null,
  drive: 'counterflow',
  heatFlux_W_m2: 3000,
  heatLeak_W: null,
  flowDirection: [0, -1],
  gravityDirection: null,
  tracer: { species: 'solid deuterium', diameter_m: 2.2e-6, density_kg_m3: 200 },
  channel: { shape: 'rectangular', width_m: 0.01, depth_m: 0.01, length_m: 0.15 },
  tracersPerArea_m2: 27e6,
  gamma_s_m2: null,
  v0_m_s: null,
};

describe('the form of a run', () => {
  it('gives back the conditions that it was filled from', () => {
    const { conditions, errors } = readRunForm(runForm(run));
    expect(errors).toEqual([]);
    expectWithin(conditions.frameInterval_s ?? 0, 1 / 120, { rel: 1e-6 });
    expect({ ...conditions, frameInterval_s: run.frameInterval_s }).toEqual(run);
    expect(runConditionsSchema.safeParse(conditions).success).toBe(true);
  });

  it('keeps the quantity when its unit is changed', () => {
    const kelvin = runForm(run);
    const millikelvin = withUnit(kelvin, 'temperature_K', 'mK');
    expect(millikelvin.text.temperature_K).toBe('1850');
    expect(readRunForm(millikelvin).conditions.temperature_K).toBe(1.85);
    const interval = withUnit(kelvin, 'frameInterval_s', 'ms');
    expect(interval.text.frameInterval_s).toBe('8.333333');
  });

  it.each([
    ['-3', "Pixel size must be a number above 0 and at most 1000 um (you typed '-3')."],
    ['0', "Pixel size must be a number above 0 and at most 1000 um (you typed '0')."],
    ['1,5', "Pixel size must be a number above 0 and at most 1000 um (you typed '1,5')."],
    ['1e999', "Pixel size must be a number above 0 and at most 1000 um (you typed '1e999')."],
    ['NaN', "Pixel size must be a number above 0 and at most 1000 um (you typed 'NaN')."],
  ])('answers a pixel size of %s in one sentence', (typed, sentence) => {
    const form = runForm(run);
    form.text.pixelSize_m = typed;
    expect(readRunForm(form).errors).toEqual([{ path: 'pixelSize_m', message: sentence }]);
  });

  it('takes an empty field for unknown, not for zero', () => {
    const form = runForm(run);
    form.text.heatFlux_W_m2 = ' ';
    expect(readRunForm(form).conditions.heatFlux_W_m2).toBeNull();
  });
});

describe('numbers as typed', () => {
  it.each([
    ['1.850', 1.85],
    ['13 020', 13020],
    ['\u22123.2', -3.2],
    ['.5', 0.5],
    ['2e-3', 0.002],
  ])('reads %s', (text, value) => expect(parseNumber(text)).toBe(value));

  it.each(['1,5', '0x10', '1 2 3a', '--1', 'Infinity', '1e'])('does not take %s for a number', (text) =>
    expect(parseNumber(text)).toBeNaN(),
  );
});
