import { createReadStream } from 'node:fs';
import { open, rm, stat, type FileHandle } from 'node:fs/promises';
import { join } from 'node:path';
import type { Column, ColumnValues } from '@/lib/exports/column';
import { npyHeader, unicodeArray } from './npy-header';
import type { SinkPlace, TableSink } from './table-sink';
import { ZipWriter } from './zip-writer';

const DESCR = { int32: '<i4', float32: '<f4', float64: '<f8', code: '|i1' } as const;

/** One column on its way: numbers go to a file of their own, text (of small tables only) waits in memory. */
interface Shelf {
  column: Column;
  file: FileHandle | null;
  path: string;
  text: (string | null)[];
}

/**
 * The table as `.npz`: an array per column, stored, not packed, so that NumPy can map it. A column of codes comes with
 * its names as `NAME_categories`; every array has its unit in `units` and its words in `descriptions`, in the order of
 * `columns`.
 */
export async function npzSink({ folder, table }: SinkPlace): Promise<TableSink> {
  const name = `${table.name}.npz`;
  const shelves: Shelf[] = [];
  for (const column of table.columns) {
    const path = join(folder, `${table.name}.${column.name}.column`);
    shelves.push({ column, path, file: column.store === 'text' ? null : await open(path, 'w'), text: [] });
  }
  const close = async () => {
    for (const { file } of shelves) await file?.close().catch(() => undefined);
    for (const { path } of shelves) await rm(path, { force: true });
  };
  let rows = 0;
  return {
    async write({ batch }) {
      rows += batch.rows;
      for (const [c, { file, text }] of shelves.entries()) {
        const values = batch.columns[c];
        if (Array.isArray(values)) for (const value of values) text.push(value);
        else if (values.byteLength > 0) await file!.writeFile(bytesOf(values));
      }
    },
    async finish() {
      const zip = await ZipWriter.create(join(folder, name));
      for (const shelf of shelves) await addColumn(zip, shelf, rows);
      await addText(zip, 'columns', table.columns.map((column) => column.name)); // prettier-ignore
      await addText(zip, 'units', table.columns.map((column) => column.unit)); // prettier-ignore
      await addText(zip, 'descriptions', table.columns.map((column) => column.description)); // prettier-ignore
      await zip.finish();
      await close();
      return [name];
    },
    abandon: close,
  };
}

const bytesOf = (values: Exclude<ColumnValues, (string | null)[]>): Uint8Array =>
  new Uint8Array(values.buffer, values.byteOffset, values.byteLength);

async function addColumn(zip: ZipWriter, { column, file, path, text }: Shelf, rows: number): Promise<void> {
  if (!file) return addText(zip, column.name, text);
  const header = npyHeader(DESCR[column.store as keyof typeof DESCR], rows);
  const { size } = await stat(path);
  async function* pieces() {
    yield header;
    yield* createReadStream(path, { highWaterMark: 1 << 20 }) as AsyncIterable<Uint8Array>;
  }
  await zip.add(`${column.name}.npy`, header.byteLength + size, pieces(), { deflate: false });
  if (column.categories) await addText(zip, `${column.name}_categories`, column.categories);
}

async function addText(zip: ZipWriter, name: string, values: readonly (string | null)[]): Promise<void> {
  const { descr, bytes } = unicodeArray(values);
  const all = Buffer.concat([npyHeader(descr, values.length), bytes]);
  await zip.add(`${name}.npy`, all.byteLength, [all], { deflate: false });
}
