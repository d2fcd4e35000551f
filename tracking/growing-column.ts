const ROOM_LEAST = 64;

type Numbers = Uint8Array | Uint32Array | Float32Array | Float64Array;

/** A column of numbers that grows as they come, in a tenth of the room that a list of objects takes. */
export class GrowingColumn<Column extends Numbers> {
  /** The numbers so far, and room for more behind them. */
  values: Column;
  length = 0;

  /**
   * @param make a column of that many zeros.
   * @param room how many numbers are expected: with the right one nothing is copied, and no room stays empty.
   */
  constructor(
    private readonly make: (room: number) => Column,
    room = ROOM_LEAST,
  ) {
    this.values = make(Math.max(1, room));
  }

  push(value: number): void {
    if (this.length === this.values.length) {
      const grown = this.make(Math.ceil((this.length + 1) * 1.5));
      grown.set(this.values);
      this.values = grown;
    }
    this.values[this.length++] = value;
  }
}

export const bytesColumn = (room?: number) => new GrowingColumn((n) => new Uint8Array(n), room);
export const countsColumn = (room?: number) => new GrowingColumn((n) => new Uint32Array(n), room);
export const numbersColumn = (room?: number) => new GrowingColumn((n) => new Float64Array(n), room);
/** Numbers of which seven digits are enough. */
export const roundedColumn = (room?: number) => new GrowingColumn((n) => new Float32Array(n), room);
