import { expect, test } from 'vitest';
import { createSpotOrder } from '@/tracking/detection/spot-order';
import { SpotTable } from '@/tracking/detection/spot-table';
import { createRandom } from '@/tracking/random';

// Sorting by a function that compares is the slow and obvious way.
const single = Math.fround;

test('keys order spots as comparing them one by one does, ties and negative places included', () => {
  const order = createSpotOrder();
  for (const count of [0, 1, 2, 50, 700]) {
    const random = createRandom(count);
    const table = new SpotTable();
    const place = () => (random.uniform() < 0.5 ? random.integer(6) - 0.5 : 20 * random.uniform() - 0.5);
    for (let i = 0; i < count; i++) table.add(place(), place(), 1, random.integer(40) / 7);
    const { x, y, response } = table;
    const all = Array.from({ length: count }, (_, i) => i);
    const byResponse = [...all].sort((a, b) => single(response[b]) - single(response[a]) || a - b);
    const byPlace = [...all].sort(
      (a, b) => single(y[a]) - single(y[b]) || single(x[a]) - single(x[b]) || a - b,
    );
    expect([...order.byResponse(table, count)]).toEqual(byResponse);
    expect([...order.byPlace(table)]).toEqual(byPlace);
  }
});
