import { describe, expect, test } from 'vitest';
import { estimatesJson } from '@/lib/tables/estimates-json';
import { decimals, significant } from '@/lib/tables/number-text';
import { reconnectionsCsv } from '@/lib/tables/reconnections-csv';
import { tableTracks } from '@/lib/tables/track-rows';
import { tracksCsv } from '@/lib/tables/tracks-csv';
import { velocitiesCsv } from '@/lib/tables/velocities-csv';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import { POINT_BRIDGED, type Tracks } from '@/tracking/types';

const SCALE = { pixelSize_m: 1e-5, frameInterval_s: 0.005 };
const TRACKS: Tracks = {
  count: 2,
  start: Uint32Array.of(0, 3, 4),
  frame: Uint32Array.of(0, 1, 2, 5),
  xPx: Float32Array.of(1.5, 2.5, 3.5, 10),
  yPx: Float32Array.of(0, -0.00001, 0.25, 20),
  sxPx: Float32Array.of(0.1, Number.NaN, 0.1, 0.2),
  syPx: Float32Array.of(0.1, Number.NaN, 0.1, 0.2),
  brightness: Float32Array.of(400, Number.NaN, 410, 99.5),
  flags: Uint8Array.of(0, POINT_BRIDGED, 0, 0),
};
const POPULATIONS = { population: Uint8Array.of(0, 2), pTrapped: Float32Array.of(0.975, Number.NaN) };
const whole = (chunks: Iterable<string>) => [...chunks].join('');

describe('numbers as text', () => {
  test.each([
    [significant(0.1 + 0.2, 8), '0.3'],
    [significant(1.23456789e-7, 4), '1.235e-7'],
    [significant(1e21, 3), '1e+21'],
    [significant(Number.NaN, 4), ''],
    [significant(null, 4), ''],
    [decimals(-0.00001, 4), '0.0000'],
    [decimals(-1.00005, 2), '-1.00'],
    [decimals(Number.POSITIVE_INFINITY, 2), ''],
  ])('%s is %s, whatever the locale', (got, expected) => expect(got).toBe(expected));
});

test('tracks.csv has the published columns; bridged frames have no errors and no brightness', () => {
  expect(whole(tracksCsv(tableTracks(TRACKS, POPULATIONS), SCALE))).toBe(
    [
      'track,frame,t_s,x_px,y_px,x_m,y_m,sx_px,sy_px,brightness,population,p_trapped',
      '0,0,0,1.5000,0.0000,0.000015,0,0.1000,0.1000,400,trapped,0.9750',
      '0,1,0.005,2.5000,0.0000,0.000025,0,,,,trapped,0.9750',
      '0,2,0.01,3.5000,0.2500,0.000035,0.0000025,0.1000,0.1000,410,trapped,0.9750',
      '1,5,0.025,10.0000,20.0000,0.0001,0.0002,0.2000,0.2000,99.5,undecided,',
      '',
    ].join('\r\n'),
  );
});

test('velocities.csv uses measured ends only', () => {
  expect(whole(velocitiesCsv(tableTracks(TRACKS, null), [1, 2], SCALE))).toBe(
    [
      'track,frame,t_s,lag_frames,vx_m_s,vy_m_s,svx_m_s,svy_m_s,population',
      '0,0,0,2,0.002,0.00025,0.00014142,0.00014142,',
      '',
    ].join('\r\n'),
  );
});

test('velocity-pdf.csv and reconnections.csv have the published columns', () => {
  const pdf = {
    population: 'trapped' as const,
    component: 'along' as const,
    lagFrames: 1,
    lagS: 0.005,
    edgesMS: [0, 0.001, 0.002],
    count: [3, 1],
    density: [750, 250],
    densityLow: [500, null],
    densityHigh: [900, null],
    samples: 4,
    tracks: 1,
    meanMS: 0.001,
    varianceM2S2: 1e-7,
    noiseVarianceM2S2: 0,
    excessKurtosis: null,
  };
  expect(whole(velocityPdfCsv([pdf])).split('\r\n')).toEqual([
    'population,component,lag_s,bin_low_m_s,bin_high_m_s,count,density_s_m,density_low,density_high',
    'trapped,along,0.005,0,0.001,3,750,500,900',
    'trapped,along,0.005,0.001,0.002,1,250,,',
    '',
  ]);
  const candidate = {
    trackA: 4,
    trackB: 9,
    t0S: 0.1234,
    xPx: 10,
    yPx: 20,
    minSeparationM: 4e-6,
    before: null,
    after: { amplitude: 1.25, exponent: 0.5 },
    pChance: 0.01,
    qValue: 0.04,
  };
  expect(whole(reconnectionsCsv([candidate], () => 'cannot-tell')).split('\r\n')).toEqual([
    'event,track_a,track_b,t0_s,x_px,y_px,min_separation_m,amplitude_before,amplitude_after,exponent_before,exponent_after,p_chance,q_value,verdict',
    '0,4,9,0.1234,10.0000,20.0000,0.000004,,1.25,,0.5,0.01,0.04,cannot-tell',
    '',
  ]);
});

test('the bytes of a long table do not depend on its pieces', () => {
  const many: Tracks = {
    ...TRACKS,
    count: 1,
    start: Uint32Array.of(0, 5000),
    frame: Uint32Array.from({ length: 5000 }, (_, i) => i),
    xPx: new Float32Array(5000),
    yPx: new Float32Array(5000),
    sxPx: new Float32Array(5000),
    syPx: new Float32Array(5000),
    brightness: new Float32Array(5000),
    flags: new Uint8Array(5000),
  };
  const chunks = [...tracksCsv(tableTracks(many, null), SCALE)];
  expect(chunks.length).toBeGreaterThan(1);
  expect(chunks.join('').split('\r\n').length).toBe(5002);
});

test('estimates.json keeps the published keys and writes null for unknown', () => {
  const text = estimatesJson([
    {
      quantity: 'line_density',
      unit: 'm^-2',
      method: 'combined',
      value: null,
      low: null,
      high: Number.NaN,
      level: 0.95,
      inputs: { sheetThickness: { value: 1.23456789123e-4, unit: 'm' } },
      note: 'Too few.',
    },
  ]);
  const [entry] = JSON.parse(text) as Record<string, unknown>[];
  expect(Object.keys(entry)).toEqual([
    'quantity',
    'unit',
    'method',
    'value',
    'low',
    'high',
    'level',
    'inputs',
    'note',
  ]);
  expect(entry).toMatchObject({
    value: null,
    high: null,
    inputs: { sheetThickness: { value: 1.2345679e-4 } },
  });
});
