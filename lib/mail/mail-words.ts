import type { MailOrder } from './mail-kinds';

/** A mail before it is given a form: the same words go into its plain text and its HTML. */
export interface MailWords {
  subject: string;
  paragraphs: string[];
  /** The one thing to do. */
  action: { label: string; url: string } | null;
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

const YOUR_NOTICES = 'You started it. Which notices come by mail is on your account page: ';

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
