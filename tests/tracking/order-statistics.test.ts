import { expect, test } from 'vitest';
import { orderStatistics } from '@/tracking/order-statistics';
import { createRandom } from '@/tracking/random';

const select = (values: ArrayLike<number>, places: readonly number[]) =>
  orderStatistics((visit) => Array.prototype.forEach.call(values, (value: number) => visit(value)), places);

test('values at any places are those of the sorted list, whatever their size, sign and number of equals', () => {
  const random = createRandom(5);
  for (let round = 0; round < 12; round++) {
    const n = 1 + random.integer(400);
    const scale = 10 ** (random.integer(40) - 20);
    const values = Float64Array.from({ length: n }, () =>
      round % 3 === 0 ? random.integer(5) - 2 : scale * random.normal(),
    );
    const sorted = values.slice().sort();
    const places = Array.from({ length: 3 }, () => random.integer(n)).concat(0, n - 1);
    expect(select(values, places)).toEqual(places.map((place) => sorted[place]));
  }
});

test('neighbouring numbers, zeros of both signs, infinities and NaN keep their order', () => {
  const values = [1, 1 + Number.EPSILON, -0, 0, Infinity, -Infinity, Number.NaN, Number.MIN_VALUE, -Number.MAX_VALUE]; // prettier-ignore
  const sorted = Float64Array.from(values).sort();
  expect(select(values, [...values.keys()])).toEqual(Array.from(sorted));
});

test('a place beyond the list is an error', () => {
  expect(() => select([1, 2], [2])).toThrow('no place 2 among 2 values');
});
