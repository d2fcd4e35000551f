import { z } from 'zod';
import { memberCreateSchema, rolesPatchSchema, tokenCreateSchema } from '@/lib/schemas/lab';
import * as lists from '@/lib/schemas/list-query';
import { listOf } from '@/lib/views/common';
import * as lab from '@/lib/views/lab-view';
import { mailItemViewSchema, mailViewSchema } from '@/lib/views/mail-view';

/** The part of the table of routes that looks after the laboratory itself. */
export const LAB_ROUTES = {
  'GET /people': {
    action: 'see-people',
    summary: 'Members of the laboratory',
    query: lists.memberListQuery,
    answer: listOf(lab.memberViewSchema),
  },
  'POST /people': {
    action: 'manage-people',
    summary: 'Add a person; the link that opens a new account is shown in this answer only',
    body: memberCreateSchema,
    answer: lab.invitedMemberViewSchema,
    status: 201,
    idempotent: false,
  },
  'GET /people/{memberId}': { action: 'see-people', summary: 'A member', answer: lab.memberViewSchema },
  'PATCH /people/{memberId}': {
    action: 'manage-people',
    summary: 'Give a member other roles',
    body: rolesPatchSchema,
    answer: lab.memberViewSchema,
    ifMatch: true,
  },
  'DELETE /people/{memberId}': {
    action: 'manage-people',
    summary: 'Remove a member: their sessions end, and their tokens of this laboratory',
    status: 204,
  },
  'POST /people/{memberId}/invitation': {
    action: 'manage-people',
    summary: 'A new invitation link in place of the one before; it is shown in this answer only',
    answer: lab.invitationViewSchema,
    status: 201,
    idempotent: false,
  },
  'GET /people/{memberId}/sessions': {
    action: 'manage-people',
    summary: 'Where a member is signed in',
    answer: listOf(lab.sessionViewSchema),
  },
  'DELETE /people/{memberId}/sessions/{sessionId}': {
    action: 'manage-people',
    summary: 'End one session of a member',
    status: 204,
  },
  'GET /sessions': {
    action: 'own-account',
    summary: 'Where you are signed in',
    answer: listOf(lab.sessionViewSchema),
  },
  'DELETE /sessions/{sessionId}': {
    action: 'own-account',
    summary: 'End one of your own sessions',
    status: 204,
  },
  'POST /people/{memberId}/sessions-end': {
    action: 'manage-people',
    summary: 'End every session of a member',
    status: 204,
  },
  'POST /people/{memberId}/password-reset': {
    action: 'manage-people',
    summary: 'Mail a member a link with which they choose a new password',
    status: 204,
  },
  'GET /tokens': {
    action: 'own-tokens',
    summary: 'Your API tokens; an administrator sees everybody’s',
    query: lists.tokenListQuery,
    answer: listOf(lab.tokenViewSchema),
  },
  'POST /tokens': {
    action: 'own-tokens',
    summary: 'Make an API token; it is shown in this answer only',
    body: tokenCreateSchema,
    answer: lab.tokenViewSchema.extend({ token: z.string() }),
    status: 201,
    idempotent: false,
  },
  'DELETE /tokens/{tokenId}': { action: 'own-tokens', summary: 'Revoke a token', status: 204 },
  'GET /audit': {
    action: 'see-audit',
    summary: 'Who did what, newest first; without the right to see everybody’s, your own',
    query: lists.auditListQuery,
    answer: listOf(lab.auditViewSchema),
  },
  'GET /audit.csv': {
    action: 'see-audit',
    summary: 'The same as a table, oldest first',
    query: lists.auditTableQuery,
    media: 'text/csv',
  },
  'GET /jobs': {
    action: 'see-queue',
    summary: 'Work of the laboratory',
    query: lists.jobListQuery,
    answer: listOf(lab.jobViewSchema),
  },
  'POST /jobs/{jobId}/again': {
    action: 'run-again',
    summary: 'Run failed work again, or try at once what waits for its next try',
    status: 204,
  },
  'GET /workers': {
    action: 'see-queue',
    summary: 'Worker processes',
    query: lists.workerListQuery,
    answer: listOf(lab.workerViewSchema),
  },
  'GET /storage': {
    action: 'see-storage',
    summary: 'What the recordings take on disk',
    answer: lab.storageViewSchema,
  },
  'GET /file-checks': {
    action: 'see-storage',
    summary: 'What the checks of stored files have seen, newest first',
    query: lists.fileCheckListQuery,
    answer: listOf(lab.fileCheckViewSchema),
  },
  'POST /file-checks': {
    action: 'check-files',
    summary: 'Check a sample of the stored files now',
    answer: lab.storageViewSchema,
    status: 202,
  },
  'GET /mail': {
    action: 'see-mail',
    summary: 'Mail of the laboratory, newest first',
    query: lists.mailListQuery,
    answer: listOf(mailItemViewSchema),
  },
  'GET /mail/{mailId}': {
    action: 'see-mail',
    summary: 'A mail, with its words where there is no mail server and they were kept here',
    answer: mailViewSchema,
  },
} as const;
