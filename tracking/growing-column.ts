type Numbers = Uint8Array | Uint32Array | Float64Array;

/** A column of numbers that grows as they come, in a tenth of the room that a list of objects takes. */
export class GrowingColumn<Column extends Numbers> {
  /** The numbers so far, and room for more behind them. */
  values: Column;
  length = 0;

  /** @param make a column of that many zeros. */
  constructor(private readonly make: (room: number) => Column) {
    this.values = make(64);
  }

  push(value: number): void {
    if (this.length === this.values.length) {
      const grown = this.make(Math.ceil(this.length * 1.5));
      grown.set(this.values);
      this.values = grown;
    }
    this.values[this.length++] = value;
  }
}

export const bytesColumn = () => new GrowingColumn((room) => new Uint8Array(room));
export const countsColumn = () => new GrowingColumn((room) => new Uint32Array(room));
export const numbersColumn = () => new GrowingColumn((room) => new Float64Array(room));
