import { describe, expect, it } from 'vitest';
import { contrastRange, contrastStep, histogramOf, moveBead } from '@/components/canvas/contrast';

describe('contrast', () => {
  it('opens with a range around the measured contrast that the camera can count', () => {
    expect(contrastRange(100, 300, 16)).toEqual({ least: 0, most: 700 });
    expect(contrastRange(100, 300, 8).most).toBe(300);
    expect(contrastRange(-10, 10, null).least).toBe(-20);
  });

  it('never lets black and white meet or leave the range', () => {
    const range = contrastRange(100, 300, 16);
    const step = contrastStep(range);
    const now = { low: 100, high: 300 };
    expect(moveBead('low', 5000, now, range)).toEqual({ low: 300 - step, high: 300 });
    expect(moveBead('low', -5000, now, range)).toEqual({ low: 0, high: 300 });
    expect(moveBead('high', -5000, now, range)).toEqual({ low: 100, high: 100 + step });
    expect(moveBead('high', 5000, now, range)).toEqual({ low: 100, high: 700 });
  });

  it('counts the grey levels and leaves out the two that hold everything beyond', () => {
    const levels = [0, 255, 1, 2, 128, 128];
    const rgba = Uint8ClampedArray.from(levels.flatMap((level) => [level, level, level, 255]));
    const bins = histogramOf(rgba, 64);
    expect(bins[0]).toBe(2);
    expect(bins[32]).toBe(2);
    expect(bins.reduce((a, b) => a + b)).toBe(4);
  });
});
