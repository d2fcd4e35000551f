/** What a mail can be about, with what its words are made of. Secrets of links are added when it is sent. */
export type MailOrder =
  | { kind: 'invitation'; byName: string }
  | { kind: 'membership'; byName: string }
  | { kind: 'password-reset'; byName: string | null }
  | { kind: 'password-changed' }
  | { kind: 'analysis-done'; analysisId: string; recordingName: string; runName: string }
  | { kind: 'analysis-failed'; analysisId: string; recordingName: string; runName: string; detail: string }
  | {
      kind: 'review-assigned';
      analysisId: string;
      recordingName: string;
      runName: string;
      byName: string;
      candidates: number;
      /** A day like 2026-03-31. */
      dueOn: string | null;
    }
  | {
      kind: 'review-disagreement';
      analysisId: string;
      recordingId: string;
      recordingName: string;
      runName: string;
      tracksRevision: number;
      candidates: { id: string; event: number }[];
    }
  | {
      kind: 'review-done';
      analysisId: string;
      recordingName: string;
      runName: string;
      /** Who has judged their set; null where every candidate has all its readings. */
      readerName: string | null;
    }
  | { kind: 'files-damaged'; recordings: string[] };

export type MailKind = MailOrder['kind'];

/** What the administrator's list calls each kind. */
export const MAIL_KIND_WORDS: Record<MailKind, string> = {
  invitation: 'invitation',
  membership: 'new membership',
  'password-reset': 'link for a new password',
  'password-changed': 'password was changed',
  'analysis-done': 'analysis done',
  'analysis-failed': 'analysis failed',
  'review-assigned': 'candidates assigned',
  'review-disagreement': 'readers disagree',
  'review-done': 'candidates judged',
  'files-damaged': 'stored files damaged',
};

/** Notices that a member may do without; everything else concerns their account or their duty. */
export const NOTICE_KINDS = [
  'analysis-done',
  'analysis-failed',
  'review-assigned',
  'review-disagreement',
  'review-done',
] as const;
export type NoticeKind = (typeof NOTICE_KINDS)[number];

export const NOTICE_WORDS: Record<NoticeKind, string> = {
  'analysis-done': 'An analysis that I started is done',
  'analysis-failed': 'An analysis that I started has failed',
  'review-assigned': 'Candidates were given to me to judge',
  'review-disagreement': 'Readers disagree and it is mine to settle',
  'review-done': 'Candidates that I gave out, or that I settle, are all judged',
};

/** Mails with a link that opens an account. */
export const LINK_KINDS: readonly MailKind[] = ['invitation', 'password-reset'];

/** Where a mail stands: `kept` in the mail folder for want of a mail server, `dropped` as nobody needs it any more. */
export const MAIL_STATES = ['waiting', 'sent', 'kept', 'dropped', 'failed'] as const;
export type MailState = (typeof MAIL_STATES)[number];
