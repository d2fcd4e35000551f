import type { PersonView } from '@/lib/views/common';

/** SQL of a person as others see them; null where the row's maker is not known. */
export const personJson = (alias: string): string =>
  `CASE WHEN ${alias}.id IS NULL THEN NULL ELSE json_build_object('id', ${alias}.id, 'name', ${alias}.name) END`;

export interface ItemRow {
  id: string;
  created_at: Date;
  updated_at: Date;
  revision: number;
}

/** Fields that every item carries. */
export const itemOf = (row: ItemRow) => ({
  id: row.id,
  createdAt: row.created_at.toISOString(),
  updatedAt: row.updated_at.toISOString(),
  revision: row.revision,
});

export const iso = (date: Date | null): string | null => date?.toISOString() ?? null;

export interface Made {
  created_by: PersonView | null;
}
