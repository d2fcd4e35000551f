import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import * as way from '@/components/review/desk-order';
import { filmCell, filmView } from '@/components/review/film-block';
import { filmOf, filmRows, stripFrames } from '@/lib/review/film';
import { actionOfKey, REVIEW_ACTIONS, reviewKeysOf, reviewKeysSchema } from '@/lib/review/review-keys';
import { reviewOrder } from '@/lib/review/review-order';

describe('the cut of a film', () => {
  const request = fc.record({
    meetingFrame: fc.double({ min: -5, max: 220, noNaN: true }),
    xPx: fc.double({ min: -3, max: 300, noNaN: true }),
    yPx: fc.double({ min: -3, max: 300, noNaN: true }),
    reach: fc.double({ min: 0, max: 120, noNaN: true }),
    image: fc.record({ frames: fc.integer({ min: 1, max: 200 }), width: fc.integer({ min: 1, max: 300 }), height: fc.integer({ min: 1, max: 300 }) }), // prettier-ignore
  });

  it('lies inside the image and the recording, and its strip inside the film', () => {
    fc.assert(
      fc.property(request, ({ reach, ...one }) => {
        const path = {
          frame: [0, Math.round(one.meetingFrame)],
          x: [one.xPx, one.xPx + reach],
          y: [one.yPx, one.yPx],
        };
        const film = filmOf({ ...one, paths: [path] });
        const { width, height, frames } = one.image;
        expect(film.leftPx >= 0 && film.leftPx + film.sizePx <= width).toBe(true);
        expect(film.topPx >= 0 && film.topPx + film.sizePx <= height).toBe(true);
        expect(film.firstFrame >= 0 && film.frames >= 1 && film.firstFrame + film.frames <= frames).toBe(
          true,
        );
        const strip = stripFrames(film);
        expect(strip).toContain(film.middleFrame);
        expect(
          strip.every((frame) => frame >= film.firstFrame && frame < film.firstFrame + film.frames),
        ).toBe(true);
        expect(filmRows(film) * film.columns).toBeGreaterThanOrEqual(film.frames);
      }),
    );
  });

  it('grows with the paths that are on film, and not with those before it', () => {
    const image = { frames: 100, width: 200, height: 200 };
    const at = (frame: number, x: number) =>
      filmOf({ meetingFrame: 50, xPx: 100, yPx: 100, image, paths: [{ frame: [frame], x: [x], y: [100] }] });
    expect(at(50, 125).sizePx).toBe(63);
    expect(at(10, 125).sizePx).toBe(29);
    expect(at(50, 190).sizePx).toBe(89);
  });

  it('shows an image position at its place in the square', () => {
    const film = filmOf({ meetingFrame: 50, xPx: 100, yPx: 60, paths: [], image: { frames: 100, width: 200, height: 200 } }); // prettier-ignore
    const view = filmView(film, 290);
    // The corner of the first camera pixel of the cut is the corner of the square.
    expect((film.leftPx - 0.5) * view.scale + view.offsetX).toBeCloseTo(0, 9);
    expect((film.topPx + film.sizePx - 0.5) * view.scale + view.offsetY).toBeCloseTo(290, 9);
    expect(filmCell(film, film.firstFrame + 6)).toEqual({ x: film.sizePx, y: film.sizePx });
  });
});

describe('keys of the review desk', () => {
  it('each does one thing, and a choice that would make one do two is refused', () => {
    expect(new Set(Object.values(REVIEW_ACTIONS).map(({ key }) => key)).size).toBe(
      Object.keys(REVIEW_ACTIONS).length,
    );
    const twice = reviewKeysSchema.safeParse({ yes: 'N' });
    expect(twice.error?.issues[0].message).toBe('The key n already does something else: Yes.');
    expect(reviewKeysSchema.safeParse({ yes: 'ab' }).error?.issues[0].message).toBe(
      'Choose one letter or digit.',
    );
  });

  it('are those that were chosen, the usual ones elsewhere, whatever is stored', () => {
    const keys = reviewKeysOf({ yes: 'J' });
    expect([actionOfKey(keys, 'j'), actionOfKey(keys, '1'), actionOfKey(keys, '2')]).toEqual([
      'yes',
      null,
      'no',
    ]);
    for (const stored of [null, 'x', { yes: 7 }, { colour: 'a' }]) expect(reviewKeysOf(stored).yes).toBe('1');
  });
});

describe('a sitting', () => {
  const items = (['yes', null, null, null] as const).map((own, i) => ({
    id: 'abcd'[i],
    event: i,
    accepted: true,
    own,
    assigned: false,
    waits: own === null,
  }));

  it('begins at the first that waits; Back reaches what was judged before', () => {
    const begun = way.beginSitting(items);
    expect([way.candidateAt(begun), way.candidateAt(way.goBack(begun))]).toEqual(['b', 'a']);
    expect(way.candidateAt(way.beginSitting(items, 'd'))).toBe('d');
  });

  it('goes on to what has no verdict yet, and ends when all have one', () => {
    let at = way.beginSitting(items);
    at = way.postpone(at);
    expect(at.ids).toEqual(['a', 'c', 'd', 'b']);
    const seen: (string | null)[] = [];
    for (let i = 0; i < 4; i++) {
      seen.push(way.candidateAt(at));
      const id = way.candidateAt(at);
      if (id) at = way.afterVerdict(at, id, 'no');
    }
    expect(seen).toEqual(['c', 'd', 'b', null]);
    expect(way.judgedCount(at)).toBe(4);
  });

  it('a change of mind leads back to where the reader was', () => {
    let at = way.beginSitting(items);
    at = way.afterVerdict(at, 'b', 'yes');
    at = way.afterVerdict(way.goBack(at), 'b', 'no');
    expect([way.candidateAt(at), at.said.b]).toEqual(['c', 'no']);
    expect(way.comingUp(at, 3)).toEqual(['d']);
  });
});

describe('the order', () => {
  it('is one and the same however the candidates come in', () => {
    const one = fc.record({
      qValue: fc.option(fc.double({ min: 0, max: 1, noNaN: true })),
      failed: fc.nat(3),
    });
    fc.assert(
      fc.property(
        fc.array(one, { maxLength: 20 }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (list, rate) => {
          const ranked = list.map((fields, event) => ({ ...fields, event }));
          const order = (from: typeof ranked) => [...from].sort(reviewOrder(rate)).map(({ event }) => event);
          expect(order([...ranked].reverse())).toEqual(order(ranked));
        },
      ),
    );
  });
});
