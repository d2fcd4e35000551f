'use server';

import { startRehearsalOf } from '@/app/api/operations/rehearsals';
import { memberAction } from '@/auth/action';
import type { SaveRehearsalResult } from '@/components/rehearsals/rehearsal-form';
import { rehearsalCreateSchema, rehearsalDraftSchema, type RehearsalCreate, type RehearsalDraft } from '@/lib/schemas/rehearsal'; // prettier-ignore
import { dropDraft, saveDraft } from '@/models/queries/rehearsal-drafts';
import { z } from 'zod';

const create = memberAction('make-rehearsal', rehearsalCreateSchema, ({ viewer, input }) =>
  startRehearsalOf(viewer, input),
);

export async function addRehearsal(request: RehearsalCreate): Promise<SaveRehearsalResult> {
  const result = await create(request);
  if (result.ok) return { ok: true, href: `/rehearsals/${result.data.id}` };
  return { ok: false, detail: result.problem.detail, errors: result.problem.errors };
}

const keep = memberAction('make-rehearsal', rehearsalDraftSchema, ({ viewer, input }) =>
  saveDraft(viewer.labId, viewer.userId, input),
);

/** Keeps what has been typed. @returns whether it was kept. */
export async function keepDraft(form: RehearsalDraft): Promise<boolean> {
  return (await keep(form)).ok;
}

const drop = memberAction('make-rehearsal', z.undefined(), ({ viewer }) =>
  dropDraft(viewer.labId, viewer.userId),
);

/** Throws away what had been typed. */
export async function forgetDraft(): Promise<boolean> {
  return (await drop(undefined)).ok;
}
