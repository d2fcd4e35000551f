import type { z } from 'zod';

/** What a job works for: its row is locked before results are written, and fails with the job. */
export type JobSubject = 'recording' | 'analysis' | 'rehearsal' | 'mail' | 'lab' | 'export';

/** The public half of a job: all that the web needs to ask for the work. */
export interface JobDefinition<Payload extends Record<string, unknown> = Record<string, unknown>> {
  kind: string;
  subject: JobSubject;
  /** Tries before the job is given up; each claim by a worker is one. */
  maxAttempts: number;
  /** Pause after a failed attempt, counted from 1, ms; left out, it is short and doubles. */
  pauseMs?: (attempt: number) => number;
  payload: z.ZodType<Payload>;
}

export function defineJob<Payload extends Record<string, unknown>>(
  definition: JobDefinition<Payload>,
): JobDefinition<Payload> {
  return definition;
}
