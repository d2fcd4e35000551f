import { join } from 'node:path';
import * as h5wasm from 'h5wasm/node';
import type { Column, ColumnValues, RowBatch } from '@/lib/exports/column';
import type { SinkPlace, TableSink } from './table-sink';

/** Most rows of one file: what the library holds in memory stays bounded. */
export const PART_ROWS_MOST = 2_000_000;
const CHUNK_ROWS = 65_536;
const GZIP = 4;

const DTYPES = { int32: '<i', float32: '<f', float64: '<d', code: '<b' } as const;

/**
 * The table as HDF5: a dataset per column with its unit and its words as attributes, packed by gzip. Above 2 million
 * rows it goes on in a next file; each part says where it begins.
 */
export async function hdf5Sink({ folder, table }: SinkPlace, rowsMost = PART_ROWS_MOST): Promise<TableSink> {
  await h5wasm.ready;
  const text = table.columns.map((): (string | null)[] => []);
  const names: string[] = [];
  let file: h5wasm.File | null = null;
  let rows = 0;
  let before = 0;

  const begin = () => {
    const name = names.length === 0 ? `${table.name}.h5` : `${table.name}-part-${names.length + 1}.h5`;
    names.push(name);
    const made = withoutClock(() => {
      const opened = new h5wasm.File(join(folder, name), 'w');
      opened.create_attribute('title', table.title);
      opened.create_attribute('description', table.description);
      opened.create_attribute('first_row', before, null, '<i');
      for (const column of table.columns) if (column.store !== 'text') makeColumn(opened, column);
      return opened;
    });
    rows = 0;
    return made;
  };
  const end = () => {
    if (!file) return;
    const open = file;
    withoutClock(() => {
      table.columns.forEach((column, c) => {
        if (column.store === 'text') makeText(open, column, text[c].splice(0));
      });
      open.close();
    });
    before += rows;
    file = null;
  };
  return {
    async write({ batch }) {
      let from = 0;
      while (from < batch.rows) {
        file ??= begin();
        const count = Math.min(batch.rows - from, rowsMost - rows);
        append(file, table.columns, batch, { from, count, at: rows }, text);
        rows += count;
        from += count;
        if (rows === rowsMost) end();
      }
    },
    async finish() {
      if (names.length === 0) file = begin();
      end();
      return names;
    },
    async abandon() {
      file?.close();
      file = null;
    },
  };
}

function makeColumn(file: h5wasm.File, column: Column): void {
  const dtype = DTYPES[column.store as keyof typeof DTYPES];
  file.create_dataset({
    name: column.name,
    data: [],
    shape: [0],
    maxshape: [null],
    chunks: [CHUNK_ROWS],
    dtype,
    compression: 'gzip',
    compression_opts: GZIP,
  });
  describe(file, column);
}

function makeText(file: h5wasm.File, column: Column, values: (string | null)[]): void {
  const data = values.map((value) => value ?? '');
  const longest = data.reduce((most, value) => Math.max(most, Buffer.byteLength(value)), 1);
  file.create_dataset({ name: column.name, data, shape: [data.length], dtype: `S${longest}` });
  describe(file, column);
}

function describe(file: h5wasm.File, { name, unit, description, categories }: Column): void {
  const dataset = file.get(name) as h5wasm.Dataset;
  dataset.create_attribute('unit', unit);
  dataset.create_attribute('description', description);
  if (categories) dataset.create_attribute('categories', categories.join(','));
}

function append(
  file: h5wasm.File,
  columns: readonly Column[],
  batch: RowBatch,
  { from, count, at }: { from: number; count: number; at: number },
  text: (string | null)[][],
): void {
  withoutClock(() => {
    columns.forEach(({ name }, c) => {
      const values: ColumnValues = batch.columns[c];
      if (Array.isArray(values)) {
        for (let i = from; i < from + count; i++) text[c].push(values[i]);
        return;
      }
      const dataset = file.get(name) as h5wasm.Dataset;
      dataset.resize([at + count]);
      dataset.write_slice([[at, at + count]], values.subarray(from, from + count));
    });
  });
}

/**
 * The library stamps every dataset with the clock; the same table must make the same bytes. It works in one go, so
 * nobody else sees the clock stand still.
 */
function withoutClock<T>(work: () => T): T {
  const now = Date.now;
  Date.now = () => 0;
  try {
    return work();
  } finally {
    Date.now = now;
  }
}
