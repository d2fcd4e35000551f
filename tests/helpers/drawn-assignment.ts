import type { SparseCosts } from '@/tracking/assign';
import { createRandom } from '@/tracking/random';

/** The seed of tests/oracles/scipy_oracles.py. */
const SEED = 20240607;
const STEPS = [1, 3, 10, 1000];

/** The table that `drawn_assignments` of tests/oracles/scipy_oracles.py draws for a trial, number by number. */
export function drawnAssignment(trial: number): { costs: SparseCosts; costOf(i: number, j: number): number } {
  const { uniform, integer } = createRandom(SEED + trial);
  const rows = 1 + integer(12);
  const columns = 1 + integer(12);
  const allowed = 0.05 + 0.95 * uniform();
  const steps = STEPS[trial % STEPS.length];
  const start = [0];
  const column: number[] = [];
  const cost: number[] = [];
  const table = new Map<number, number>();
  for (let i = 0; i < rows; i++) {
    for (let j = 0; j < columns; j++) {
      const value = integer(steps) - Math.floor(steps / 2) - 1;
      if (uniform() >= allowed) continue;
      column.push(j);
      cost.push(value);
      table.set(i * columns + j, value);
    }
    start.push(column.length);
  }
  const costs = { rows, columns, start, column, cost };
  return { costs, costOf: (i, j) => table.get(i * columns + j) ?? Number.NaN };
}
