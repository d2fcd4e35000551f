import { readFile } from 'node:fs/promises';
import { ParquetFile, readParquet as read, wasmMemory } from 'parquet-wasm/node';

type Values = (number | string | null)[];

/**
 * Columns of a Parquet file as another implementation reads them (Rust's `parquet`), taken out of its memory by the
 * Arrow C data interface with 32-bit pointers. Not-a-numbers come as null, like what is missing.
 */
export async function readParquet(path: string): Promise<Record<string, Values>> {
  const table = read(new Uint8Array(await readFile(path))).intoFFI();
  const memory = () => new DataView((wasmMemory() as WebAssembly.Memory).buffer);
  const pointer = (at: number) => memory().getUint32(at, true);
  const whole = (at: number) => Number(memory().getBigInt64(at, true));
  const textAt = (at: number) => {
    const bytes = new Uint8Array(memory().buffer, at);
    return Buffer.from(bytes.subarray(0, bytes.indexOf(0))).toString('utf8');
  };
  const schema = table.schemaAddr();
  const fields = Array.from({ length: whole(schema + 24) }, (_, c) => {
    const child = pointer(pointer(schema + 32) + c * 4);
    return { format: textAt(pointer(child)), name: textAt(pointer(child + 4)) };
  });
  const columns: Record<string, Values> = Object.fromEntries(fields.map(({ name }) => [name, []]));
  for (let batch = 0; batch < table.numArrays(); batch++) {
    const array = table.arrayAddr(batch);
    fields.forEach(({ name, format }, c) => {
      const child = pointer(pointer(array + 44) + c * 4);
      const [length, offset] = [whole(child), whole(child + 16)];
      const buffer = (i: number) => pointer(pointer(child + 40) + i * 4);
      const [validity, first, second] = [buffer(0), buffer(1), format === 'u' ? buffer(2) : 0];
      for (let i = offset; i < offset + length; i++) {
        const there = validity === 0 || (memory().getUint8(validity + (i >> 3)) >> (i & 7)) & 1;
        columns[name].push(there ? valueAt(memory(), format, first, second, i) : null);
      }
    });
  }
  return columns;
}

/** Formats of the interface: i int32, f and g floating point, u text with 32-bit offsets. */
function valueAt(memory: DataView, format: string, first: number, second: number, i: number) {
  if (format === 'i') return memory.getInt32(first + i * 4, true);
  if (format === 'u') {
    const [from, to] = [memory.getInt32(first + i * 4, true), memory.getInt32(first + i * 4 + 4, true)];
    return Buffer.from(memory.buffer, second + from, to - from).toString('utf8');
  }
  const value =
    format === 'f' ? memory.getFloat32(first + i * 4, true) : memory.getFloat64(first + i * 8, true);
  if (format !== 'f' && format !== 'g') throw new Error(`Unknown format ${format}.`);
  return Number.isNaN(value) ? null : value;
}

/** The key-value metadata of the file. */
export async function parquetMetadata(path: string): Promise<Map<string, string>> {
  const file = await ParquetFile.fromFile(new Blob([await readFile(path)]));
  return file.metadata().fileMetadata().keyValueMetadata() as Map<string, string>;
}
