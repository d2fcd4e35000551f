import type { Column, ColumnStore } from './column';

/** A column of a table, as the data dictionary tells it. */
export const column = (
  name: string,
  store: ColumnStore,
  unit: string,
  description: string,
  categories?: readonly string[],
): Column => ({ name, store, unit, description, ...(categories ? { categories } : {}) });
