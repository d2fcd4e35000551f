'use server';

import { z } from 'zod';
import { memberAction, type ActionResult } from '@/auth/action';
import { assertMayTo } from '@/auth/viewer';
import type { SaveRunResult } from '@/components/runs/run-form';
import { runCreateSchema, type RunCreate } from '@/lib/schemas/run';
import type { RunView } from '@/lib/views/run-view';
import { getCampaign } from '@/models/queries/campaigns';
import { createRun, getRun, patchRun } from '@/models/queries/runs';

const createSchema = z.strictObject({ campaignId: z.uuid(), run: runCreateSchema });
const create = memberAction('create-run', createSchema, async ({ viewer, input }) => {
  await getCampaign(viewer.labId, input.campaignId);
  return createRun(viewer, input.campaignId, input.run);
});

const patchSchema = z.strictObject({ id: z.uuid(), revision: z.int(), run: runCreateSchema });
const patch = memberAction('edit-run', patchSchema, async ({ viewer, input }) => {
  const run = await getRun(viewer.labId, input.id);
  assertMayTo(viewer, 'edit-run', [run.createdBy?.id ?? null]);
  return patchRun(
    { labId: viewer.labId, userId: viewer.userId, id: input.id, ifMatch: [input.revision] },
    input.run,
  );
});

function resultOf(result: ActionResult<RunView>, hrefOf?: (run: RunView) => string): SaveRunResult {
  if (!result.ok) {
    const { code, detail, errors, current } = result.problem;
    const stored = current as RunView | undefined;
    return {
      ...{ ok: false, code, detail, errors },
      ...(stored ? { stored: { revision: stored.revision, at: stored.updatedAt } } : {}),
    };
  }
  return { ok: true, revision: result.data.revision, href: hrefOf?.(result.data) };
}

export async function addRun(campaignId: string, run: RunCreate): Promise<SaveRunResult> {
  return resultOf(await create({ campaignId, run }), ({ id }) => `/runs/${id}/recordings`);
}

export async function editRun(id: string, run: RunCreate, revision: number | null): Promise<SaveRunResult> {
  return resultOf(await patch({ id, revision, run }));
}
