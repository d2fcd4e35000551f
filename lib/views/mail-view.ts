import { z } from 'zod';
import { MAIL_KIND_WORDS, MAIL_STATES, type MailKind } from '../mail/mail-kinds';
import { personSchema } from './common';

const kinds = Object.keys(MAIL_KIND_WORDS) as [MailKind, ...MailKind[]];

export const mailItemViewSchema = z.object({
  id: z.uuid(),
  kind: z.enum(kinds),
  state: z.enum(MAIL_STATES),
  person: personSchema.extend({ email: z.string() }),
  /** The address that it went to; null before. */
  recipient: z.string().nullable(),
  subject: z.string().nullable(),
  /** Why it has not left yet; `nextAt` null once nobody tries any more. */
  trouble: z.object({ tries: z.int(), detail: z.string(), nextAt: z.iso.datetime().nullable() }).nullable(),
  createdAt: z.iso.datetime(),
  sentAt: z.iso.datetime().nullable(),
});
export type MailItemView = z.infer<typeof mailItemViewSchema>;

/** Words are kept only where there is no mail server, and not where their link opens other laboratories too. */
export const mailViewSchema = mailItemViewSchema.extend({
  text: z.string().nullable(),
  html: z.string().nullable(),
});
export type MailView = z.infer<typeof mailViewSchema>;
