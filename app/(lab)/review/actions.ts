'use server';

import { revalidatePath } from 'next/cache';
import { z } from 'zod';
import { assign, takeBack } from '@/app/api/operations/review';
import { memberAction } from '@/auth/action';
import { assignmentCreateSchema, type AssignmentInput } from '@/lib/schemas/review';

type Result = { ok: true } | { ok: false; detail: string };

const give = memberAction('assign-review', assignmentCreateSchema, async ({ viewer, input }) => {
  await assign(viewer, input);
});

const take = memberAction('assign-review', z.strictObject({ id: z.uuid() }), async ({ viewer, input }) => {
  await takeBack(viewer, input.id);
});

const resultOf = (result: Awaited<ReturnType<typeof give>>): Result => {
  if (!result.ok) return { ok: false, detail: result.problem.errors[0]?.message ?? result.problem.detail };
  revalidatePath('/review');
  return { ok: true };
};

/** Gives candidates of an analysis to a reader. */
export async function giveCandidates(input: AssignmentInput): Promise<Result> {
  return resultOf(await give(input));
}

/** Takes an assignment back. */
export async function takeBackCandidates(id: string): Promise<Result> {
  return resultOf(await take({ id }));
}
