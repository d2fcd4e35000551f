import { join } from 'node:path';
import { fileWriter, ParquetWriter, type ColumnSource, type SchemaElement } from 'hyparquet-writer';
import type { Column, ColumnValues, TableDefinition } from '@/lib/exports/column';
import type { SinkPlace, TableSink } from './table-sink';

/**
 * The table as Parquet, a row group per batch. Text and categories are UTF-8 and null where unknown; numbers are NaN
 * where unknown. Units and words stand in the key-value metadata, once for all and per column.
 */
export async function parquetSink({ folder, table }: SinkPlace): Promise<TableSink> {
  const name = `${table.name}.parquet`;
  const writer = new ParquetWriter({
    writer: fileWriter(join(folder, name)),
    schema: schemaOf(table),
    kvMetadata: metadataOf(table),
    createdBy: 'Beadline',
  });
  return {
    async write({ batch }) {
      if (batch.rows === 0) return;
      const columnData = table.columns.map((column, c) => sourceOf(column, batch.columns[c]));
      await writer.write({ columnData, rowGroupSize: batch.rows });
    },
    async finish() {
      await writer.finish();
      return [name];
    },
    async abandon() {},
  };
}

function schemaOf({ columns }: TableDefinition): SchemaElement[] {
  return [{ name: 'root', num_children: columns.length }, ...columns.map(elementOf)];
}

function elementOf({ name, store }: Column): SchemaElement {
  if (store === 'code' || store === 'text') {
    return { name, type: 'BYTE_ARRAY', converted_type: 'UTF8', repetition_type: 'OPTIONAL' };
  }
  const type = store === 'int32' ? 'INT32' : store === 'float32' ? 'FLOAT' : 'DOUBLE';
  return { name, type, repetition_type: 'REQUIRED' };
}

function sourceOf({ name, categories }: Column, values: ColumnValues): ColumnSource {
  if (!(values instanceof Int8Array)) return { name, data: values };
  return { name, data: Array.from(values, (code) => categories?.[code] ?? null) };
}

function metadataOf({ title, description, columns }: TableDefinition) {
  return [
    { key: 'title', value: title },
    { key: 'description', value: description },
    ...columns.flatMap((column) => [
      { key: `unit:${column.name}`, value: column.unit },
      { key: `description:${column.name}`, value: column.description },
    ]),
  ];
}
