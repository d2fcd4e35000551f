import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import type { Transaction } from 'sequelize';
import { from as copyFrom } from 'pg-copy-streams';
import { asDatabaseFailure } from '../database-away';
import { rawClient } from '../raw-client';

/** Signature, flags and extension length of PostgreSQL's binary COPY format. */
const SIGNATURE = Buffer.from('PGCOPY\n\xff\r\n\0\0\0\0\0\0\0\0\0', 'latin1');
const TRAILER = Buffer.from([0xff, 0xff]);
const PIECE_BYTES = 1 << 18;

/** Writes rows of one table in PostgreSQL's binary COPY format. */
export class CopyRows {
  private buffer = Buffer.allocUnsafe(PIECE_BYTES);
  private used = SIGNATURE.copy(this.buffer);

  /** Begins a row of so many columns; they follow in order. */
  row(columns: number): this {
    this.room(2);
    this.used = this.buffer.writeInt16BE(columns, this.used);
    return this;
  }

  bytes(value: Uint8Array): this {
    this.room(4 + value.length);
    this.used = this.buffer.writeInt32BE(value.length, this.used);
    this.buffer.set(value, this.used);
    this.used += value.length;
    return this;
  }

  int4(value: number): this {
    this.room(8);
    this.used = this.buffer.writeInt32BE(4, this.used);
    this.used = this.buffer.writeInt32BE(value, this.used);
    return this;
  }

  int2(value: number | null): this {
    if (value === null) return this.nothing();
    this.room(6);
    this.used = this.buffer.writeInt32BE(2, this.used);
    this.used = this.buffer.writeInt16BE(value, this.used);
    return this;
  }

  /** NaN becomes NULL: unknown. */
  real(value: number): this {
    if (Number.isNaN(value)) return this.nothing();
    this.room(8);
    this.used = this.buffer.writeInt32BE(4, this.used);
    this.used = this.buffer.writeFloatBE(value, this.used);
    return this;
  }

  nothing(): this {
    this.room(4);
    this.used = this.buffer.writeInt32BE(-1, this.used);
    return this;
  }

  get full(): boolean {
    return this.used >= PIECE_BYTES;
  }

  take(): Buffer {
    const piece = Buffer.from(this.buffer.subarray(0, this.used));
    this.used = 0;
    return piece;
  }

  private room(bytes: number): void {
    if (this.used + bytes <= this.buffer.length) return;
    const grown = Buffer.allocUnsafe(Math.max(2 * this.buffer.length, this.used + bytes));
    this.buffer.copy(grown, 0, 0, this.used);
    this.buffer = grown;
  }
}

/**
 * Streams rows into a table by COPY inside a transaction; memory stays that of one piece.
 * @param columns names of the table's columns, in the order in which `writeRow` gives them
 */
export async function copyRows<T>(
  table: string,
  columns: readonly string[],
  items: Iterable<T> | AsyncIterable<T>,
  writeRow: (rows: CopyRows, item: T) => void,
  transaction: Transaction,
): Promise<void> {
  async function* pieces() {
    const rows = new CopyRows();
    for await (const item of items) {
      writeRow(rows, item);
      if (rows.full) yield rows.take();
    }
    yield Buffer.concat([rows.take(), TRAILER]);
  }
  const text = `COPY ${table} (${columns.join(', ')}) FROM STDIN (FORMAT binary)`;
  await pipeline(
    Readable.from(pieces(), { objectMode: false }),
    rawClient(transaction).query(copyFrom(text)),
  ).catch((cause: unknown) => {
    throw asDatabaseFailure(cause);
  });
}
