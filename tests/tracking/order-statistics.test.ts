import { expect, test } from 'vitest';
import { orderStatistics } from '@/tracking/order-statistics';
import { createRandom } from '@/tracking/random';

const select = (values: ArrayLike<number>, places: readonly number[]) =>
  orderStatistics((visit) => Array.prototype.forEach.call(values, (value: number) => visit(value)), places);

/** A long list is not held: it is gone through several times instead. */
const LONG = (1 << 20) + 1000;

test.each([
  ['short', 400, 12],
  ['long', LONG, 4],
])('values at any places of a %s list are those of the sorted list', (_, most, rounds) => {
  const random = createRandom(5);
  for (let round = 0; round < rounds; round++) {
    const n = most === LONG ? LONG : 1 + random.integer(most);
    const scale = 10 ** (random.integer(40) - 20);
    const values = Float64Array.from({ length: n }, () =>
      round % 3 === 0 ? random.integer(5) - 2 : scale * random.normal(),
    );
    const sorted = values.slice().sort();
    const places = Array.from({ length: 3 }, () => random.integer(n)).concat(0, n - 1);
    expect(select(values, places)).toEqual(places.map((place) => sorted[place]));
  }
});

test.each([0, LONG])(
  'neighbouring numbers, zeros of both signs, infinities and NaN keep their order (%d more)',
  (more) => {
    const few = [1, 1 + Number.EPSILON, -0, 0, Infinity, -Infinity, Number.NaN, Number.MIN_VALUE, -Number.MAX_VALUE]; // prettier-ignore
    const values = [...few, ...new Array<number>(more).fill(2)];
    const sorted = Float64Array.from(values).sort();
    const places = [...few.keys()].map((k) => (k < 6 ? k : values.length - few.length + k));
    expect(select(values, places)).toEqual(places.map((place) => sorted[place]));
  },
);

test('a place beyond the list is an error', () => {
  expect(() => select([1, 2], [2])).toThrow('no place 2 among 2 values');
  expect(() => select(new Float64Array(LONG), [LONG])).toThrow(`no place ${LONG} among ${LONG} values`);
});
