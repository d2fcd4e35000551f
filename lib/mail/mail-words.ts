import { countOf } from '../format/count';
import type { MailOrder } from './mail-kinds';

/** A mail before it is given a form: the same words go into its plain text and its HTML. */
export interface MailWords {
  subject: string;
  paragraphs: string[];
  /** The one thing to do. */
  action: { label: string; url: string } | null;
  /** Pictures that travel with it, named as their attachments are. */
  pictures?: { name: string; alt: string }[];
  /** Why it came and how to have fewer. */
  foot: string;
}

export interface MailContext {
  /** Origin of the site, without a slash at the end. */
  site: string;
  /** Of the recipient. */
  name: string;
  labName: string;
  /** Of a mail that opens an account. */
  link: { url: string; until: string } | null;
}

const NOTICES = 'Which notices come by mail is on your account page: ';
const YOUR_NOTICES = `You started it. ${NOTICES}`;

/** Strips that one mail carries at most; the rest is a click away. */
export const STRIPS_MOST = 4;
export const stripName = (event: number): string => `candidate-${event}.png`;

function eventsText(candidates: readonly { event: number }[]): string {
  const shown = candidates.slice(0, 12).map(({ event }) => String(event));
  const more = candidates.length - shown.length;
  return more > 0 ? `${shown.join(', ')} and ${more} more` : shown.join(', ');
}

/** The words of a mail. @throws Error for a mail that needs a link and has none. */
export function mailWords(order: MailOrder, context: MailContext): MailWords {
  const { site, labName } = context;
  switch (order.kind) {
    case 'invitation': {
      const { url, until } = linkOf(context);
      return {
        subject: `Your invitation to ${labName}`,
        paragraphs: [
          `${order.byName} invites you to ${labName} on Beadline, the tool in which this laboratory turns its camera stacks into tracks and numbers.`,
          `The link opens your account once. It ends ${until}; ask for a new one after that.`,
        ],
        action: { label: 'Choose a password', url },
        foot: 'Whoever has this link can open the account: pass it on to nobody.',
      };
    }
    case 'membership':
      return {
        subject: `You are a member of ${labName}`,
        paragraphs: [
          `${order.byName} made you a member of ${labName} on Beadline.`,
          'Sign in with the account that you have; the laboratory is in the menu behind your name.',
        ],
        action: { label: 'Open Beadline', url: `${site}/` },
        foot: 'If this should not be, tell the person who did it.',
      };
    case 'password-reset': {
      const { url, until } = linkOf(context);
      const who = order.byName
        ? `${order.byName}, who looks after ${labName}, asked for a link with which you choose a new password.`
        : 'Somebody, most likely you, asked for a new password for this account.';
      return {
        subject: 'Choose a new password',
        paragraphs: [
          who,
          `The link works once and ends ${until}. A new password ends every session of your account.`,
        ],
        action: { label: 'Choose a new password', url },
        foot: 'If you did not want this, do nothing: your password stays as it is.',
      };
    }
    case 'password-changed':
      return {
        subject: 'Your password was changed',
        paragraphs: [
          'The password of your account was changed just now, and all sessions before that have ended.',
          'If that was not you, choose a new password at once and tell your laboratory’s administrator.',
        ],
        action: { label: 'It was not me', url: `${site}/new-password` },
        foot: 'This mail always comes after a change of the password.',
      };
    case 'analysis-done':
      return {
        subject: `Analysis done: ${order.recordingName}`,
        paragraphs: [`The analysis of ${order.recordingName}, run ${order.runName}, in ${labName} is done.`],
        action: { label: 'See the results', url: `${site}/analyses/${order.analysisId}` },
        foot: `${YOUR_NOTICES}${site}/account`,
      };
    case 'analysis-failed':
      return {
        subject: `Analysis failed: ${order.recordingName}`,
        paragraphs: [
          `The analysis of ${order.recordingName}, run ${order.runName}, in ${labName} could not be finished.`,
          order.detail,
        ],
        action: { label: 'See what went wrong', url: `${site}/analyses/${order.analysisId}` },
        foot: `${YOUR_NOTICES}${site}/account`,
      };
    case 'review-assigned': {
      const count = countOf(order.candidates, 'candidate');
      return {
        subject: `${count} to judge: ${order.recordingName}`,
        paragraphs: [
          `${order.byName} gives you ${count} of ${order.recordingName}, run ${order.runName}, to judge.`,
          ...(order.dueOn ? [`They are due on ${order.dueOn}.`] : []),
        ],
        action: { label: 'Judge them', url: `${site}/review/${order.analysisId}` },
        foot: `They were given to you. ${NOTICES}${site}/account`,
      };
    }
    case 'review-disagreement': {
      const { candidates } = order;
      const count = countOf(candidates.length, 'candidate');
      return {
        subject: `Readers disagree on ${count}: ${order.recordingName}`,
        paragraphs: [
          `Readers disagree on ${count} of ${order.recordingName}, run ${order.runName}, in ${labName}: ${eventsText(candidates)}.`,
          'Look at what each of them said, and settle it with a reason.',
        ],
        pictures: candidates.slice(0, STRIPS_MOST).map(({ event }) => ({
          name: stripName(event),
          alt: `Frames around closest approach of candidate ${event}, with both tracks`,
        })),
        action: { label: 'Settle them', url: `${site}/review/${order.analysisId}/settle` },
        foot: `You settle disagreements in ${labName}. ${NOTICES}${site}/account`,
      };
    }
    case 'review-done': {
      const who = order.readerName
        ? `${order.readerName} has judged all candidates that were given to them`
        : 'Every candidate has its readings';
      return {
        subject: `Candidates judged: ${order.recordingName}`,
        paragraphs: [`${who}: ${order.recordingName}, run ${order.runName}, in ${labName}.`],
        action: { label: 'See the analysis', url: `${site}/analyses/${order.analysisId}` },
        foot: `${NOTICES}${site}/account`,
      };
    }
    case 'files-damaged':
      return {
        subject: `Stored files damaged in ${labName}`,
        paragraphs: [
          'The check of stored files found recordings whose bytes are not those that were sent:',
          ...order.recordings.map((name) => `– ${name}`),
          'Results made before are kept. Restore the files from a backup, or send the stacks again.',
        ],
        action: { label: 'See the files', url: `${site}/lab/storage` },
        foot: `You look after ${labName}: this mail always comes.`,
      };
  }
}

function linkOf({ link }: MailContext) {
  if (!link) throw new Error('This mail needs a link.');
  return link;
}
