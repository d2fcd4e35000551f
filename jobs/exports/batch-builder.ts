import type { Column, ColumnStore, ColumnValues, RowBatch } from '@/lib/exports/column';

/** Rows that are handed on together: a few megabytes. */
export const BATCH_ROWS = 65_536;

const EMPTY: Record<ColumnStore, (rows: number) => ColumnValues> = {
  int32: (rows) => new Int32Array(rows),
  float32: (rows) => new Float32Array(rows),
  float64: (rows) => new Float64Array(rows),
  code: (rows) => new Int8Array(rows),
  text: (rows) => new Array<string | null>(rows).fill(null),
};

/** Collects rows column by column; its arrays are used again once a batch was taken. */
export class BatchBuilder {
  rows = 0;
  readonly columns: ColumnValues[];

  constructor(columns: readonly Column[]) {
    this.columns = columns.map(({ store }) => EMPTY[store](BATCH_ROWS));
  }

  get full(): boolean {
    return this.rows === BATCH_ROWS;
  }

  /** The rows collected so far, as views that hold until the next row is added. */
  take(): RowBatch {
    const rows = this.rows;
    this.rows = 0;
    const columns = this.columns.map((values) =>
      Array.isArray(values) ? values.slice(0, rows) : values.subarray(0, rows),
    );
    return { rows, columns };
  }
}
