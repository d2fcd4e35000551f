import { created } from '@/auth/answer';
import { listRecipes, saveRecipe } from '@/models/queries/recipes';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /recipes', ({ viewer, query }) => listRecipes(viewer.labId, query)),
  POST: memberRoute('POST /recipes', async ({ viewer, body }) => {
    const recipe = await saveRecipe(viewer, body);
    return created(recipe, `/api/v1/recipes?q=${encodeURIComponent(recipe.name)}`);
  }),
});
