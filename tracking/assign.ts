/** Rows, the columns each may take and at what cost: edges of row `i` are `start[i] .. start[i + 1] - 1`. */
export interface SparseCosts {
  rows: number;
  columns: number;
  /** Length rows + 1. */
  start: ArrayLike<number>;
  column: ArrayLike<number>;
  cost: ArrayLike<number>;
}

/**
 * Solver of sparse one-to-one assignment; keep one and call it per frame, its arrays are reused.
 *
 * `solve` writes to `columnOfRow` (length >= rows) the column of each row, or -1. A row may stay
 * alone at cost 0 and a column may stay unused, so pass costs relative to that: only links of
 * negative cost can be worth making. The total cost is the least possible.
 *
 * Method: shortest augmenting paths with reduced costs (Jonker & Volgenant 1987), searched through
 * the edges that exist, so that separate groups of rows and columns are solved on their own.
 */
export interface AssignmentSolver {
  solve(costs: SparseCosts, columnOfRow: Int32Array): void;
}

export function createAssignmentSolver(): AssignmentSolver {
  let rowRoom = 0;
  let columnRoom = 0;
  /** Dual price of a column; the price of a row is implied by its match. */
  let price = new Float64Array(0);
  let rowOfColumn = new Int32Array(0);
  /** Length of the shortest path found to a column, and the row it comes from. */
  let reach = new Float64Array(0);
  let from = new Int32Array(0);
  let settled = new Uint8Array(0);
  let touched = new Int32Array(0);
  let rowPrice = new Float64Array(0);
  const heap = createColumnHeap();

  const makeRoom = (rows: number, columns: number) => {
    if (columns > columnRoom) {
      columnRoom = Math.max(columns, 2 * columnRoom);
      price = new Float64Array(columnRoom);
      rowOfColumn = new Int32Array(columnRoom);
      reach = new Float64Array(columnRoom).fill(Infinity);
      from = new Int32Array(columnRoom);
      settled = new Uint8Array(columnRoom);
      touched = new Int32Array(columnRoom);
    }
    if (rows > rowRoom) {
      rowRoom = Math.max(rows, 2 * rowRoom);
      rowPrice = new Float64Array(rowRoom);
    }
  };

  const solve = ({ rows, columns, start, column, cost }: SparseCosts, columnOfRow: Int32Array) => {
    makeRoom(rows, columns);
    price.fill(0, 0, columns);
    rowOfColumn.fill(-1, 0, columns);
    columnOfRow.fill(-1, 0, rows);
    for (let first = 0; first < rows; first++) {
      // Every row owns a private column of cost 0 ("alone"): the path may end there too.
      let touchedCount = 0;
      let best = Infinity;
      let bestColumn = -1;
      let bestAlone = -1;
      let row = first;
      let along = 0;
      rowPrice[first] = 0;
      heap.clear();
      for (;;) {
        const base = along - rowPrice[row];
        // Staying alone costs 0, reduced by the row's price.
        if (base < best) {
          best = base;
          bestAlone = row;
          bestColumn = -1;
        }
        for (let e = start[row]; e < start[row + 1]; e++) {
          const j = column[e];
          if (settled[j]) continue;
          const length = base + cost[e] - price[j];
          if (length >= best || length >= reach[j]) continue;
          if (reach[j] === Infinity) touched[touchedCount++] = j;
          reach[j] = length;
          from[j] = row;
          if (rowOfColumn[j] < 0) {
            best = length;
            bestColumn = j;
            bestAlone = -1;
          } else {
            heap.push(length, j);
          }
        }
        let next = heap.pop();
        while (next >= 0 && (settled[next] || heap.poppedKey > reach[next])) next = heap.pop();
        if (next < 0 || reach[next] >= best) break;
        settled[next] = 1;
        along = reach[next];
        row = rowOfColumn[next];
      }
      // Prices of what the search settled keep every reduced cost >= 0.
      rowPrice[first] += best;
      for (let t = 0; t < touchedCount; t++) {
        const j = touched[t];
        if (settled[j]) {
          const slack = best - reach[j];
          price[j] -= slack;
          rowPrice[rowOfColumn[j]] += slack;
        }
      }
      // Hand the columns on along the path, from its end back to the first row.
      let free = bestColumn;
      if (bestAlone >= 0) {
        free = columnOfRow[bestAlone];
        columnOfRow[bestAlone] = -1;
        row = bestAlone;
      } else {
        row = -1;
      }
      while (row !== first) {
        const taker = from[free];
        const released = columnOfRow[taker];
        columnOfRow[taker] = free;
        rowOfColumn[free] = taker;
        row = taker;
        free = released;
      }
      for (let t = 0; t < touchedCount; t++) {
        reach[touched[t]] = Infinity;
        settled[touched[t]] = 0;
      }
    }
  };
  return { solve };
}

/** Binary heap of (path length, column); `pop` gives the column of the shortest, or -1. */
function createColumnHeap() {
  let keys = new Float64Array(64);
  let values = new Int32Array(64);
  let size = 0;
  return {
    poppedKey: 0,
    clear() {
      size = 0;
    },
    push(key: number, value: number) {
      if (size === keys.length) {
        const widerKeys = new Float64Array(2 * size);
        const widerValues = new Int32Array(2 * size);
        widerKeys.set(keys);
        widerValues.set(values);
        keys = widerKeys;
        values = widerValues;
      }
      let at = size++;
      while (at > 0) {
        const parent = (at - 1) >> 1;
        if (keys[parent] <= key) break;
        keys[at] = keys[parent];
        values[at] = values[parent];
        at = parent;
      }
      keys[at] = key;
      values[at] = value;
    },
    pop(): number {
      if (size === 0) return -1;
      this.poppedKey = keys[0];
      const top = values[0];
      const key = keys[--size];
      const value = values[size];
      let at = 0;
      for (;;) {
        let child = 2 * at + 1;
        if (child >= size) break;
        if (child + 1 < size && keys[child + 1] < keys[child]) child++;
        if (keys[child] >= key) break;
        keys[at] = keys[child];
        values[at] = values[child];
        at = child;
      }
      keys[at] = key;
      values[at] = value;
      return top;
    },
  };
}
