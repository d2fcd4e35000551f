import { describe, expect, test } from 'vitest';
import type { TracersOnLines } from '@/tracking/estimates/fellows';
import { seenLines } from '@/tracking/estimates/seen-lines';
import { decoratedShare } from '@/tracking/estimates/sheet-geometry';
import { expectWithin } from '@/tests/helpers/expect-within';

const H = 1e-4;

function onLines(perFrame: number, perLengthM: number, shares = [0.25, 0.25, 0.5]): TracersOnLines {
  const tracers = Float64Array.from(shares);
  return { perFrame, perLengthM, tracers, pairs: { toldLines: tracers, ownLines: tracers }, untoldError: 0 };
}

describe('share of the lines that are seen', () => {
  test('all tracks used: the lines that carry a tracer', () => {
    const all = onLines(100, 1e4);
    const seen = seenLines({ all, used: all }, H);
    expectWithin(seen?.share ?? 0, decoratedShare(1), { rel: 1e-12 });
    expectWithin(seen?.doubt ?? 1, 0, { abs: 1e-12 });
  });

  test('tracks left out one by one thin the tracers of every line', () => {
    const seen = seenLines({ all: onLines(100, 1e4), used: onLines(40, 0.4e4) }, H);
    expectWithin(seen?.share ?? 0, decoratedShare(0.4), { rel: 1e-12 });
    expectWithin(seen?.doubt ?? 1, 0, { abs: 1e-12 });
  });

  test('tracks left out line by line: the truth is within what the doubt allows, and so it is between', () => {
    const byOne = decoratedShare(0.4);
    const byLine = 0.4 * decoratedShare(1);
    const seen = seenLines({ all: onLines(100, 1e4), used: onLines(40, 1e4) }, H);
    expectWithin(seen?.share ?? 0, Math.sqrt(byOne * byLine), { rel: 1e-12 });
    // Uniform over the whole range.
    expectWithin(seen?.doubt ?? 0, Math.log(byOne / byLine) / Math.sqrt(12), { rel: 1e-12 });
  });

  test('what a line adds is how the share changes when there is more of it', () => {
    const numbers = { n: [10, 20, 5], p: [12, 6, 9], m: [6, 9, 2], q: [5, 2, 3] };
    const build = ({ n, p, m, q }: typeof numbers) => {
      const sum = (of: number[]) => of.reduce((a, b) => a + b, 0);
      const part = (of: number[]) => Float64Array.from(of, (v) => v / sum(of));
      const tracers = (of: number[], pairs: number[]): TracersOnLines => ({
        perFrame: sum(of),
        perLengthM: (2e4 * sum(pairs)) / sum(of),
        tracers: part(of),
        pairs: { toldLines: part(pairs), ownLines: part(pairs) },
        untoldError: 0,
      });
      return { all: tracers(n, p), used: tracers(m, q) };
    };
    const influence = seenLines(build(numbers), H)?.influence('ownLines') ?? [];
    for (let line = 0; line < 3; line++) {
      // One more such line, for a small part of the time.
      const more = (by: number) => {
        const grown = (of: number[]) => of.map((v, i) => (i === line ? v * (1 + by) : v));
        const { n, p, m, q } = numbers;
        return Math.log(
          seenLines(build({ n: grown(n), p: grown(p), m: grown(m), q: grown(q) }), H)?.share ?? 0,
        );
      };
      expectWithin(influence[line], (more(1e-4) - more(-1e-4)) / 2e-4, { abs: 1e-5 });
    }
  });

  test('too few pairs of used tracks: nothing is said', () => {
    expect(seenLines({ all: onLines(100, 1e4), used: null }, H)).toBeNull();
  });
});
