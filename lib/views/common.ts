import { z } from 'zod';

/** What every item that can be edited carries. */
export const itemFields = {
  id: z.uuid(),
  createdAt: z.iso.datetime(),
  updatedAt: z.iso.datetime(),
  /** Shown in `ETag`; `If-Match` must repeat it when the item is changed. */
  revision: z.int(),
};

/** A person as others see them. */
export const personSchema = z.object({ id: z.uuid(), name: z.string() });
export type PersonView = z.infer<typeof personSchema>;

/** What everything says of itself that was made for a rehearsal: nothing in it was measured in a laboratory. */
export const rehearsalMarkSchema = z.object({
  id: z.uuid(),
  name: z.string(),
  kind: z.enum(['simulated', 'planted']),
});
export type RehearsalMark = z.infer<typeof rehearsalMarkSchema>;

export const codedSchema = z.object({ code: z.string(), detail: z.string() });

/** A page of a list; `nextCursor` is null at the end. */
export function listOf<T extends z.ZodType>(item: T) {
  return z.object({ items: z.array(item), nextCursor: z.string().nullable() });
}
export interface ListView<T> {
  items: T[];
  nextCursor: string | null;
}

/** Problem document of RFC 9457 with our code, field errors and the request's id. */
export const problemSchema = z.object({
  type: z.string(),
  title: z.string(),
  status: z.int(),
  detail: z.string(),
  code: z.string(),
  errors: z.array(z.object({ path: z.string(), message: z.string() })),
  requestId: z.string(),
});
export type ProblemView = z.infer<typeof problemSchema>;
