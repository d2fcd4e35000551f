/** Spots of one frame sorted into square cells, to find those near a place. Arrays are reused. */
export class SpotCells {
  private columns = 1;
  private rows = 1;
  private start = new Int32Array(2);
  private members = new Int32Array(64);
  found = new Int32Array(64);

  constructor(
    private readonly width: number,
    private readonly height: number,
    private readonly cellPx: number,
  ) {
    this.columns = Math.max(1, Math.ceil(width / cellPx));
    this.rows = Math.max(1, Math.ceil(height / cellPx));
    this.start = new Int32Array(this.columns * this.rows + 1);
  }

  /** Sorts in spots `from .. to - 1`. */
  fill(xPx: Float32Array, yPx: Float32Array, from: number, to: number): void {
    const count = to - from;
    if (this.members.length < count) {
      this.members = new Int32Array(2 * count);
      this.found = new Int32Array(2 * count);
    }
    const { start, members } = this;
    start.fill(0);
    for (let s = from; s < to; s++) start[this.cell(xPx[s], yPx[s]) + 1]++;
    for (let c = 1; c < start.length; c++) start[c] += start[c - 1];
    // Taken from the back, each cell's spots end up in order and the ends become the starts.
    for (let s = to - 1; s >= from; s--) members[--start[this.cell(xPx[s], yPx[s]) + 1]] = s - from;
    for (let c = 0; c + 1 < start.length; c++) start[c] = start[c + 1];
    start[start.length - 1] = count;
  }

  /**
   * Writes to `found` the spots (counted from the first one filled in) in the cells that a rectangle
   * touches, some a little outside it; returns how many.
   */
  find(leftPx: number, topPx: number, rightPx: number, bottomPx: number): number {
    const { start, members, found, columns } = this;
    const left = this.column(leftPx);
    const right = this.column(rightPx);
    const bottom = this.row(bottomPx);
    let count = 0;
    for (let r = this.row(topPx); r <= bottom; r++) {
      const end = start[r * columns + right + 1];
      for (let k = start[r * columns + left]; k < end; k++) found[count++] = members[k];
    }
    return count;
  }

  private cell(x: number, y: number): number {
    return this.row(y) * this.columns + this.column(x);
  }

  private column(x: number): number {
    return Math.max(0, Math.min(this.columns - 1, Math.floor(x / this.cellPx)));
  }

  private row(y: number): number {
    return Math.max(0, Math.min(this.rows - 1, Math.floor(y / this.cellPx)));
  }
}
