/** How a column is stored where a format knows types: 32-bit whole, 32- and 64-bit floating, code of a category, text. */
export type ColumnStore = 'int32' | 'float32' | 'float64' | 'code' | 'text';

/** One column of an exported table: what the data dictionary says of it. */
export interface Column {
  name: string;
  store: ColumnStore;
  /** As in the data dictionary, "1" for pure numbers, empty for text. */
  unit: string;
  description: string;
  /** Names of the codes 0, 1, ... of a `code` column; -1 is unknown. */
  categories?: readonly string[];
}

export interface TableDefinition {
  /** File name without its ending. */
  name: string;
  title: string;
  description: string;
  columns: readonly Column[];
  /** Columns that tell the rows apart. */
  key: readonly string[];
}

/** Values of one column of a batch. Unknown is NaN, -1 in a `code` column, null in a `text` column. */
export type ColumnValues = Int32Array | Float32Array | Float64Array | Int8Array | (string | null)[];

/** Some rows of a table, column by column in the order of its definition. */
export interface RowBatch {
  rows: number;
  columns: ColumnValues[];
}

const TYPES: Record<ColumnStore, 'integer' | 'number' | 'string'> = {
  int32: 'integer',
  float32: 'number',
  float64: 'number',
  code: 'string',
  text: 'string',
};

/** The type of a column in a Table Schema. */
export const schemaType = ({ store }: Column): 'integer' | 'number' | 'string' => TYPES[store];
