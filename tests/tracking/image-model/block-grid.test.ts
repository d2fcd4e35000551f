import { describe, expect, test } from 'vitest';
import { blockGrid, blockStart, fillGaps, interpolateBlocks } from '@/tracking/image-model/block-grid';
import { nthElement } from '@/tracking/nth-element';
import { smoothTable } from '@/tracking/image-model/smooth-table';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

describe('blocks of an image', () => {
  test('cover it without holes, whatever its size', () => {
    for (const [width, height] of [
      [1, 1],
      [7, 300],
      [64, 64],
      [1000, 33],
    ]) {
      const { columns, rows } = blockGrid(width, height);
      expect(blockStart(0, columns, width)).toBe(0);
      expect(blockStart(columns, columns, width)).toBe(width);
      expect(blockStart(rows, rows, height)).toBe(height);
      for (let c = 0; c < columns; c++) {
        expect(blockStart(c + 1, columns, width)).toBeGreaterThan(blockStart(c, columns, width));
      }
    }
  });

  test('a plane through their middles is drawn as the plane, up to the border', () => {
    for (const [width, height] of [
      [50, 70],
      [16, 90],
      [5, 3],
      [97, 16],
    ]) {
      const grid = blockGrid(width, height);
      const middle = (block: number, blocks: number, pixels: number) =>
        0.5 * (blockStart(block, blocks, pixels) + blockStart(block + 1, blocks, pixels) - 1);
      const slopeX = grid.columns > 1 ? 0.3 : 0;
      const slopeY = grid.rows > 1 ? -0.2 : 0;
      const plane = (x: number, y: number) => 40 + slopeX * x + slopeY * y;
      const values = Float64Array.from({ length: grid.columns * grid.rows }, (_, b) =>
        plane(
          middle(b % grid.columns, grid.columns, width),
          middle(Math.floor(b / grid.columns), grid.rows, height),
        ),
      );
      interpolateBlocks(values, grid).forEach((value, i) => {
        expectWithin(value, plane(i % width, Math.floor(i / width)), { abs: 1e-4 });
      });
    }
  });

  test('without a value take the mean of their neighbours, and 0 where there is none at all', () => {
    const grid = { width: 48, height: 16, columns: 3, rows: 1 };
    const some = Float64Array.of(2, Number.NaN, 6);
    fillGaps(some, grid);
    expect([...some]).toEqual([2, 4, 6]);
    const none = Float64Array.of(Number.NaN, Number.NaN, Number.NaN);
    fillGaps(none, grid);
    expect([...none]).toEqual([0, 0, 0]);
  });
});

test('the nth value is that of the sorted values, and the smaller ones come before it', () => {
  const random = createRandom(4);
  for (let trial = 0; trial < 300; trial++) {
    const count = 1 + random.integer(60);
    // Few different values, so that many are equal.
    const values = Float64Array.from({ length: count + 3 }, () => random.integer(1 + (trial % 40)) - 5);
    const sorted = values.slice(0, count).sort();
    const n = random.integer(count);
    expect(nthElement(values, count, n)).toBe(sorted[n]);
    for (let i = 0; i < count; i++) {
      if (i < n) expect(values[i]).toBeLessThanOrEqual(sorted[n]);
      if (i > n) expect(values[i]).toBeGreaterThanOrEqual(sorted[n]);
    }
  }
});

describe('a smoothed table', () => {
  const grid = { width: 320, height: 320, columns: 20, rows: 20 };
  const fill = (value: (x: number, y: number) => number) =>
    Float64Array.from({ length: 400 }, (_, b) => value(b % 20, Math.floor(b / 20)));

  test('has less than half of the noise, and keeps a plane', () => {
    const random = createRandom(6);
    const plane = fill((x, y) => 5 + 0.4 * x - 0.3 * y);
    const noisy = plane.map((value) => value + 0.5 * random.normal());
    const left = smoothTable(
      noisy,
      fill(() => 0.25),
      grid,
    ).map((value, b) => value - plane[b]);
    const rms = Math.sqrt(left.reduce((sum, off) => sum + off * off, 0) / 400);
    // (17 / 35) of the noise inside, somewhat more along the border and where lines are drawn to a curve.
    expect(rms).toBeLessThan(0.65 * 0.5);
    smoothTable(
      plane,
      fill(() => 1e-6),
      grid,
    ).forEach((value, b) => expectWithin(value, plane[b], { abs: 1e-9 }));
  });

  test('lets straight lines between block means of a curve run along the curve on average', () => {
    const curve = (x: number) => 10 + 0.002 * (x - 160) ** 2;
    const means = fill((c) => {
      let sum = 0;
      for (let x = 16 * c; x < 16 * c + 16; x++) sum += curve(x) / 16;
      return sum;
    });
    const image = (table: Float64Array) =>
      interpolateBlocks(table, grid).subarray(100 * 320 + 48, 100 * 320 + 272);
    const off = (table: Float64Array) =>
      image(table).reduce((sum, value, i) => sum + value - curve(48 + i), 0) / 224;
    expect(off(means)).toBeGreaterThan(0.1);
    expectWithin(
      off(
        smoothTable(
          means,
          fill(() => 1),
          grid,
        ),
      ),
      0,
      { abs: 0.01 },
    );
  });

  test('keeps the edge of a shadow', () => {
    const shadow = fill((x) => (x < 10 ? 20 : 5));
    const smooth = smoothTable(
      shadow,
      fill(() => 0.01),
      grid,
    );
    for (let b = 0; b < 400; b++)
      if (b % 20 !== 9 && b % 20 !== 10) expectWithin(smooth[b], shadow[b], { abs: 0.2 });
    expectWithin(smooth[9], 20, { abs: 1e-9 });
    expectWithin(smooth[10], 5, { abs: 1e-9 });
  });
});
