/** Edges row by row, in arrays that grow. */
export function createEdges() {
  let start = new Int32Array(1025);
  let column = new Int32Array(4096);
  let cost = new Float64Array(4096);
  let count = 0;
  return {
    clear(rows: number) {
      if (start.length < rows + 1) start = new Int32Array(2 * rows + 1);
      start[0] = 0;
      count = 0;
    },
    add(toColumn: number, atCost: number) {
      if (count === column.length) {
        const widerColumn = new Int32Array(2 * count);
        widerColumn.set(column);
        column = widerColumn;
        const widerCost = new Float64Array(2 * count);
        widerCost.set(cost);
        cost = widerCost;
      }
      column[count] = toColumn;
      cost[count++] = atCost;
    },
    endRow(row: number) {
      start[row + 1] = count;
    },
    arrays: () => ({ start, column, cost }),
  };
}
