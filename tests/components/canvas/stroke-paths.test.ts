import { describe, expect, it } from 'vitest';
import { placeBeads, taperPath, type ScreenLine } from '@/components/canvas/stroke-paths';
import { expectWithin } from '@/tests/helpers/expect-within';

// Stands behind other points, as lines do in the shared lists.
const line = (points: [number, number][]): ScreenLine => ({
  x: Float32Array.from([99, ...points.map(([x]) => x)]),
  y: Float32Array.from([99, ...points.map(([, y]) => y)]),
  from: 1,
  to: points.length + 1,
});

describe('strokes on images', () => {
  // Distances and widths are those of the product's own table of strokes.
  it('carry a bead on the newest point and one every 7 px of path behind it', () => {
    const beads: [number, number][] = [];
    placeBeads(line([[0, 0], [10, 0], [10, 12]]), (x, y) => beads.push([x, y])); // prettier-ignore
    expect(beads[0]).toEqual([10, 12]);
    expect(beads).toHaveLength(4);
    // Path length 22: beads at 0, 7, 14 and 21 from the newest point.
    const expected = [[10, 12], [10, 5], [8, 0], [1, 0]]; // prettier-ignore
    beads.forEach(([x, y], i) => {
      expectWithin(x, expected[i][0], { abs: 1e-5 });
      expectWithin(y, expected[i][1], { abs: 1e-5 });
    });
  });

  it('show a track of one point as one bead, and standing points without end', () => {
    const beads: number[] = [];
    placeBeads(line([[3, 4]]), (x) => beads.push(x));
    expect(beads).toEqual([3]);
    placeBeads(line([[3, 4], [3, 4], [3, 4]]), (x) => beads.push(x)); // prettier-ignore
    expect(beads.length).toBeLessThan(5);
  });

  it('widen from 0.5 px at the oldest point to 3.2 px at the newest', () => {
    const ys = new Map<number, number[]>();
    const add = (x: number, y: number) => ys.set(x, [...(ys.get(x) ?? []), y]);
    taperPath({ moveTo: add, lineTo: add, closePath: () => undefined }, line([[0, 0], [10, 0], [20, 0]]), 0); // prettier-ignore
    const width = (x: number) => Math.max(...ys.get(x)!) - Math.min(...ys.get(x)!);
    expectWithin(width(0), 0.5, { abs: 1e-6 });
    expectWithin(width(20), 3.2, { abs: 1e-6 });
    expectWithin(width(10), (0.5 + 3.2) / 2, { abs: 1e-6 });
  });
});
