import type { z } from 'zod';
import { notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { recipeListQuery } from '@/lib/schemas/list-query';
import type { recipeCreateSchema } from '@/lib/schemas/recipe';
import type { ListView } from '@/lib/views/common';
import type { RecipeView } from '@/lib/views/recipe-view';
import type { RecipeRequest } from '@/tracking/types';
import { getSequelize } from '../database';
import { containing, listPage } from './list-page';
import { itemOf, personJson, type ItemRow, type Made } from './person';
import { execute, selectRow } from './select';

interface Row extends ItemRow, Made {
  name: string;
  version: number;
  note: string | null;
  fields: RecipeRequest;
}

const SELECT = `p.id, p.name, p.version, p.note, p.fields, p.revision, p.created_at, p.updated_at,
  ${personJson('u')} AS created_by`;
const FROM = 'recipes p LEFT JOIN users u ON u.id = p.created_by';

const viewOf = (row: Row): RecipeView => ({
  ...itemOf(row),
  name: row.name,
  version: row.version,
  note: row.note,
  fields: row.fields,
  createdBy: row.created_by,
});

export async function listRecipes(
  labId: string,
  query: z.output<typeof recipeListQuery>,
): Promise<ListView<RecipeView>> {
  const bind: unknown[] = [labId];
  const where = ['p.lab_id = $1'];
  if (query.q) where.push(`p.name ILIKE $${bind.push(containing(query.q))}`);
  const page = await listPage<Row>(
    {
      select: SELECT,
      from: FROM,
      where,
      bind,
      idColumn: 'p.id',
      sorts: {
        createdAt: { by: 'p.created_at', type: 'timestamptz' },
        name: { by: 'lower(p.name)', type: 'text' },
      },
    },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND */
export async function getRecipe(labId: string, id: string): Promise<RecipeView> {
  const row = await selectRow<Row>(`SELECT ${SELECT} FROM ${FROM} WHERE p.lab_id = $1 AND p.id = $2`, [
    labId,
    id,
  ]);
  if (!row) throw notFound('recipe');
  return viewOf(row);
}

/** Saves a recipe; a name that exists gets its next version, and no version is ever edited. */
export async function saveRecipe(
  maker: { labId: string; userId: string },
  { name, note = null, fields }: z.output<typeof recipeCreateSchema>,
): Promise<RecipeView> {
  const id = newId();
  await getSequelize().transaction(async (transaction) => {
    // Two people who save the same name at once get two versions, one after the other.
    await execute(
      'SELECT pg_advisory_xact_lock(hashtextextended($1, 0))',
      [`recipe:${maker.labId}:${name}`],
      transaction,
    );
    await execute(
      `INSERT INTO recipes (id, lab_id, name, version, note, fields, created_by)
       VALUES ($1, $2, $3, (SELECT coalesce(max(version), 0) + 1 FROM recipes WHERE lab_id = $2 AND name = $3), $4, $5::jsonb, $6)`,
      [id, maker.labId, name, note, JSON.stringify(fields), maker.userId],
      transaction,
    );
  });
  return getRecipe(maker.labId, id);
}
