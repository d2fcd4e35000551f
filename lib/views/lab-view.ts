import { z } from 'zod';
import { ROLES, SCOPES } from '../access';
import { MAIL_STATES } from '../mail/mail-kinds';
import { itemFields, personSchema } from './common';

export const meViewSchema = z.object({
  id: z.uuid(),
  name: z.string(),
  email: z.string(),
  lab: z.object({ id: z.uuid(), name: z.string(), slug: z.string() }),
  roles: z.array(z.enum(ROLES)),
  scopes: z.array(z.enum(SCOPES)),
  labs: z.array(
    z.object({ id: z.uuid(), name: z.string(), slug: z.string(), roles: z.array(z.enum(ROLES)) }),
  ),
});
export type MeView = z.infer<typeof meViewSchema>;

export const memberViewSchema = z.object({
  ...itemFields,
  person: personSchema.extend({ email: z.string() }),
  roles: z.array(z.enum(ROLES)),
  /** Null once the person has chosen a password; before that, when the invitation ends or ended. */
  invitedUntil: z.iso.datetime().nullable(),
  /** How the mail of the newest invitation fares; null where none was asked for. */
  invitationMail: z.object({ state: z.enum(MAIL_STATES), delayed: z.boolean() }).nullable(),
});
export type MemberView = z.infer<typeof memberViewSchema>;

/** A link that opens an account; the answer that holds it is the only place where it stands. */
export const invitationViewSchema = z.object({ url: z.url(), expiresAt: z.iso.datetime() });
export type InvitationView = z.infer<typeof invitationViewSchema>;

/** `invitation` is null where the person can sign in already, or was invited by another laboratory. */
export const invitedMemberViewSchema = memberViewSchema.extend({
  invitation: invitationViewSchema.nullable(),
});
export type InvitedMemberView = z.infer<typeof invitedMemberViewSchema>;

export const tokenViewSchema = z.object({
  id: z.uuid(),
  name: z.string(),
  owner: personSchema,
  /** First letters of the token, to tell it from others. */
  hint: z.string(),
  scopes: z.array(z.enum(SCOPES)),
  createdAt: z.iso.datetime(),
  lastUsedAt: z.iso.datetime().nullable(),
  revokedAt: z.iso.datetime().nullable(),
});
export type TokenView = z.infer<typeof tokenViewSchema>;

export const auditViewSchema = z.object({
  id: z.uuid(),
  createdAt: z.iso.datetime(),
  /** Null where nobody was signed in. */
  person: personSchema.nullable(),
  action: z.string(),
  subject: z.object({ kind: z.string(), id: z.string().nullable(), name: z.string().nullable() }),
  detail: z.record(z.string(), z.unknown()),
});
export type AuditView = z.infer<typeof auditViewSchema>;

export const workerViewSchema = z.object({
  id: z.uuid(),
  host: z.string(),
  pid: z.int(),
  startedAt: z.iso.datetime(),
  heartbeatAt: z.iso.datetime(),
  /** Since the last sign of life, by the clock of the database, s. */
  silent_s: z.number(),
  alive: z.boolean(),
  codeVersion: z.string(),
  job: z.object({ kind: z.string(), chunk: z.int(), progress: z.number() }).nullable(),
});
export type WorkerView = z.infer<typeof workerViewSchema>;

/** A browser in which a person is signed in. */
export const sessionViewSchema = z.object({
  id: z.uuid(),
  /** As in `Firefox on Linux`. */
  device: z.string(),
  signedInAt: z.iso.datetime(),
  lastUsedAt: z.iso.datetime(),
  /** The one that asks. */
  own: z.boolean(),
});
export type SessionView = z.infer<typeof sessionViewSchema>;

export const jobViewSchema = z.object({
  id: z.uuid(),
  kind: z.string(),
  subjectId: z.uuid(),
  /** Name of the recording that it is about; null for work on something else. */
  recordingName: z.string().nullable(),
  chunk: z.int(),
  state: z.enum(['waiting', 'running', 'done', 'failed', 'stopped']),
  attempt: z.int(),
  attemptsMost: z.int(),
  /** When it is tried again, while it waits for that. */
  nextAt: z.iso.datetime().nullable(),
  progress: z.number(),
  error: z.object({ code: z.string(), detail: z.string() }).nullable(),
  createdAt: z.iso.datetime(),
  updatedAt: z.iso.datetime(),
});
export type JobView = z.infer<typeof jobViewSchema>;

export const storageViewSchema = z.object({
  recordings: z.int(),
  bytes: z.int(),
  arrivingBytes: z.int(),
  /** Of them, what was made for rehearsals. */
  rehearsals: z.object({ recordings: z.int(), bytes: z.int() }),
  freeBytes: z.int().nullable(),
  /** What the laboratory may keep. */
  quotaBytes: z.int(),
  /** What the checks of stored files have seen. */
  checks: z.object({
    checked: z.int(),
    /** Ready recordings that nobody has looked at yet. */
    unchecked: z.int(),
    notIntact: z.int(),
    lastAt: z.iso.datetime().nullable(),
    underWay: z.boolean(),
  }),
});
export type StorageView = z.infer<typeof storageViewSchema>;

export const fileCheckViewSchema = z.object({
  recording: z.object({ id: z.uuid(), name: z.string() }),
  state: z.enum(['intact', 'damaged', 'missing']),
  detail: z.string().nullable(),
  bytes: z.int(),
  checkedAt: z.iso.datetime(),
  since: z.iso.datetime().nullable(),
});
export type FileCheckView = z.infer<typeof fileCheckViewSchema>;
