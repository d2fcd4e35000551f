/** Spots of one frame while they are being worked on; arrays grow and are reused. */
export class SpotTable {
  count = 0;
  x = new Float64Array(256);
  y = new Float64Array(256);
  n = new Float64Array(256);
  sx = new Float64Array(256);
  sy = new Float64Array(256);
  sn = new Float64Array(256);
  /** Number of its size in the list of `spotSizes`. */
  size = new Uint8Array(256);
  /** Matched-filter response that found it. */
  response = new Float64Array(256);
  /** Score of being longer one way than the other, see `elongation.ts`. */
  elongation = new Float64Array(256);
  /** The same of the single spot that it was part of before it was told apart from a close one, or 0. */
  elongationAsOne = new Float64Array(256);
  /** Variance of the position that comes from the chance of being two spots, px^2. */
  doubtX = new Float64Array(256);
  doubtY = new Float64Array(256);
  /** Number of the group that it is fitted with, -1 for none yet, and that group's turn. */
  group = new Int32Array(256);
  turn = new Int32Array(256);
  /** 1 where likelihood told it apart from a spot close by. */
  toldApart = new Uint8Array(256);
  /** 1 while its light isn't painted, as long as nobody is near enough to see it. */
  unpainted = new Uint8Array(256);
  /** 0 once it turned out not to be a spot. */
  alive = new Uint8Array(256);

  private cellPx = 1;
  private columns = 1;
  private rows = 1;
  private cellStart = new Int32Array(1);
  private cellSpots = new Int32Array(256);

  add(x: number, y: number, n: number, response: number, size = 0): number {
    if (this.count === this.x.length) this.grow();
    const i = this.count++;
    this.x[i] = x;
    this.y[i] = y;
    this.n[i] = n;
    this.sx[i] = Infinity;
    this.sy[i] = Infinity;
    this.sn[i] = Infinity;
    this.response[i] = response;
    this.size[i] = size;
    this.elongation[i] = 0;
    this.elongationAsOne[i] = 0;
    this.doubtX[i] = 0;
    this.doubtY[i] = 0;
    this.group[i] = -1;
    this.turn[i] = 0;
    this.toldApart[i] = 0;
    this.unpainted[i] = 1;
    this.alive[i] = 1;
    return i;
  }

  /** Sorts the spots present into cells, for `near` to look as far as `reachPx`. Call again after spots were added. */
  index(width: number, height: number, reachPx: number): void {
    // About one spot in a cell: there is less to go through when there are few.
    this.cellPx = Math.max(reachPx, Math.sqrt((width * height) / Math.max(1, this.count)));
    this.columns = Math.max(1, Math.ceil(width / this.cellPx));
    this.rows = Math.max(1, Math.ceil(height / this.cellPx));
    const cells = this.columns * this.rows;
    if (this.cellStart.length < cells + 1) this.cellStart = new Int32Array(cells + 1);
    if (this.cellSpots.length < this.count) this.cellSpots = new Int32Array(this.x.length);
    this.cellStart.fill(0);
    for (let i = 0; i < this.count; i++) this.cellStart[this.cellOf(i) + 1]++;
    for (let c = 0; c < cells; c++) this.cellStart[c + 1] += this.cellStart[c];
    for (let i = this.count - 1; i >= 0; i--) {
      const cell = this.cellOf(i);
      // Filled from the back of each cell; the counts come back to the starts below.
      this.cellSpots[--this.cellStart[cell + 1]] = i;
    }
    for (let c = 0; c < cells; c++) this.cellStart[c] = this.cellStart[c + 1];
    this.cellStart[cells] = this.count;
  }

  /**
   * Living spots within `reachPx` (at most what `index` was told) of a spot, itself left out, written to `found`.
   *
   * @returns how many; what doesn't fit into `found` is left out.
   */
  near(i: number, reachPx: number, found: Int32Array): number {
    const { x, y, alive, cellStart, cellSpots, columns, rows } = this;
    const column = this.clampColumn(Math.floor(x[i] / this.cellPx));
    const row = this.clampRow(Math.floor(y[i] / this.cellPx));
    const left = Math.max(0, column - 1);
    const right = Math.min(columns - 1, column + 1);
    let count = 0;
    for (let r = Math.max(0, row - 1); r <= Math.min(rows - 1, row + 1); r++) {
      // Cells of a row follow each other, and so do their spots.
      const end = cellStart[r * columns + right + 1];
      for (let k = cellStart[r * columns + left]; k < end; k++) {
        const j = cellSpots[k];
        if (j === i || alive[j] === 0) continue;
        const dx = x[j] - x[i];
        const dy = y[j] - y[i];
        if (dx * dx + dy * dy > reachPx * reachPx || count === found.length) continue;
        found[count++] = j;
      }
    }
    return count;
  }

  private cellOf(i: number): number {
    const column = this.clampColumn(Math.floor(this.x[i] / this.cellPx));
    return this.clampRow(Math.floor(this.y[i] / this.cellPx)) * this.columns + column;
  }

  private clampColumn(column: number): number {
    return Math.max(0, Math.min(this.columns - 1, column));
  }

  private clampRow(row: number): number {
    return Math.max(0, Math.min(this.rows - 1, row));
  }

  private grow(): void {
    const room = 2 * this.x.length;
    const wider = <T extends { set(from: T): void }>(fresh: T, old: T): T => {
      fresh.set(old);
      return fresh;
    };
    const numbers = (old: Float64Array<ArrayBuffer>) => wider(new Float64Array(room), old);
    this.x = numbers(this.x);
    this.y = numbers(this.y);
    this.n = numbers(this.n);
    this.sx = numbers(this.sx);
    this.sy = numbers(this.sy);
    this.sn = numbers(this.sn);
    this.response = numbers(this.response);
    this.size = wider(new Uint8Array(room), this.size);
    this.elongation = numbers(this.elongation);
    this.elongationAsOne = numbers(this.elongationAsOne);
    this.doubtX = numbers(this.doubtX);
    this.doubtY = numbers(this.doubtY);
    this.group = wider(new Int32Array(room), this.group);
    this.turn = wider(new Int32Array(room), this.turn);
    this.toldApart = wider(new Uint8Array(room), this.toldApart);
    this.unpainted = wider(new Uint8Array(room), this.unpainted);
    this.alive = wider(new Uint8Array(room), this.alive);
  }
}
