import { expect, test } from 'vitest';
import { createAssignmentSolver } from '@/tracking/assign';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

/** Least total over every way to give rows distinct columns or none, by trying them all. */
function leastTotalByTrying(table: number[][], row = 0, used = 0): number {
  if (row === table.length) return 0;
  let least = leastTotalByTrying(table, row + 1, used);
  table[row].forEach((cost, column) => {
    if (cost === Infinity || used & (1 << column)) return;
    least = Math.min(least, cost + leastTotalByTrying(table, row + 1, used | (1 << column)));
  });
  return least;
}

function sparse(table: number[][], columns: number) {
  const start = [0];
  const column: number[] = [];
  const cost: number[] = [];
  for (const row of table) {
    row.forEach((value, j) => {
      if (value === Infinity) return;
      column.push(j);
      cost.push(value);
    });
    start.push(column.length);
  }
  return { rows: table.length, columns, start, column, cost };
}

test('the total cost is the least possible, for every shape and share of forbidden pairs', () => {
  const random = createRandom(11);
  const solver = createAssignmentSolver();
  for (let trial = 0; trial < 3000; trial++) {
    const rows = random.integer(6);
    const columns = 1 + random.integer(6);
    const forbidden = random.uniform();
    // Every other trial has whole-number costs, so that ties abound.
    const whole = trial % 2 === 0;
    const table = Array.from({ length: rows }, () =>
      Array.from({ length: columns }, () => {
        if (random.uniform() < forbidden) return Infinity;
        const cost = 8 * random.uniform() - 5;
        return whole ? Math.round(cost) : cost;
      }),
    );
    const columnOfRow = new Int32Array(rows);
    solver.solve(sparse(table, columns), columnOfRow);
    const taken = [...columnOfRow].filter((j) => j >= 0);
    expect(new Set(taken).size, 'one row per column').toBe(taken.length);
    const total = [...columnOfRow].reduce((sum, j, i) => sum + (j < 0 ? 0 : table[i][j]), 0);
    expectWithin(total, leastTotalByTrying(table), { abs: 1e-9 });
  }
});

test('a link that would cost more than leaving both ends alone is not made', () => {
  const columnOfRow = new Int32Array(2);
  createAssignmentSolver().solve(
    sparse(
      [
        [0.5, Infinity],
        [Infinity, -0.5],
      ],
      2,
    ),
    columnOfRow,
  );
  expect([...columnOfRow]).toEqual([-1, 1]);
});

test('many separate pairs are solved without looking at each other', () => {
  const n = 200_000;
  const start = Int32Array.from({ length: n + 1 }, (_, i) => i);
  const column = Int32Array.from({ length: n }, (_, i) => n - 1 - i);
  const columnOfRow = new Int32Array(n);
  const cost = new Float64Array(n).fill(-1);
  createAssignmentSolver().solve({ rows: n, columns: n, start, column, cost }, columnOfRow);
  expect(columnOfRow).toEqual(column);
});
