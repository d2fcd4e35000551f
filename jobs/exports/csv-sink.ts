import { open } from 'node:fs/promises';
import { join } from 'node:path';
import type { SinkPlace, TableSink } from './table-sink';

/** The table as text; what a piece brings is written as it is. */
export async function csvSink({ folder, table }: SinkPlace): Promise<TableSink> {
  const name = `${table.name}.csv`;
  const file = await open(join(folder, name), 'w');
  return {
    async write({ csv }) {
      const bytes = typeof csv === 'string' ? Buffer.from(csv) : csv;
      // A write may take only some of its bytes.
      for (let done = 0; done < bytes.length;) {
        done += (await file.write(bytes, done, bytes.length - done)).bytesWritten;
      }
    },
    async finish() {
      await file.close();
      return [name];
    },
    abandon: () => file.close(),
  };
}
