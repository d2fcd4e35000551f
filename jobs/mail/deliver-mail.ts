import { createTransport } from 'nodemailer';
import { mailSettings, type MailSettings } from '@/lib/mail-settings';
import { FinalFailure } from '../final-failure';
import { keepMail } from './keep-mail';

export interface OutgoingMail {
  id: string;
  to: { name: string; address: string };
  subject: string;
  text: string;
  html: string;
  /** Shown inside the words, by name. */
  pictures?: { name: string; png: Buffer }[];
}

/** A mail server that is slower than this counts as away; the worker has other work to do. */
const TIMES_MS = {
  connectionTimeout: 10_000,
  greetingTimeout: 10_000,
  socketTimeout: 20_000,
  dnsTimeout: 10_000,
};

/** Nothing that a text holds may make the library read files or addresses. */
const CLOSED = { disableFileAccess: true, disableUrlAccess: true } as const;

/**
 * Hands a mail to the mail server; without one it is kept in the mail folder.
 * @throws FinalFailure when the server refuses this very mail for good (RFC 5321, 4.2.1: replies of 5yz),
 *   any other error when it may take it later.
 */
export async function deliverMail(
  mail: OutgoingMail,
  settings: MailSettings = mailSettings(),
): Promise<'sent' | 'kept'> {
  const message = messageOf(mail, settings);
  if (!settings.smtpUrl) {
    const built = await createTransport({ streamTransport: true, buffer: true, newline: 'windows', ...CLOSED }).sendMail(message); // prettier-ignore
    await keepMail(mail.id, built.message as Buffer);
    return 'kept';
  }
  const transport = createTransport({ url: settings.smtpUrl, ...TIMES_MS, ...CLOSED });
  try {
    await transport.sendMail(message);
  } catch (cause) {
    throw failureOf(cause);
  } finally {
    transport.close();
  }
  return 'sent';
}

function messageOf({ id, to, subject, text, html, pictures = [] }: OutgoingMail, { from }: MailSettings) {
  return {
    from,
    to,
    // The envelope names one recipient, whatever a header may hold.
    envelope: { from: from.address, to: [to.address] },
    subject,
    text,
    html,
    attachments: pictures.map(({ name, png }) => ({
      filename: name,
      cid: name,
      content: png,
      contentType: 'image/png',
      contentDisposition: 'inline' as const,
    })),
    // The same at each try, so that mail programs can tell a repetition.
    messageId: `<${id}@${from.address.split('@')[1]}>`,
    headers: { 'Auto-Submitted': 'auto-generated' },
  };
}

/** Errors of the library name the stage in `code` and the server's reply in `responseCode`. */
function failureOf(cause: unknown): Error {
  const { code, responseCode, response, message } = cause as {
    code?: string;
    responseCode?: number;
    response?: string;
    message?: string;
  };
  const refused = code === 'EENVELOPE' || code === 'EMESSAGE';
  if (refused && responseCode !== undefined && responseCode >= 500 && responseCode < 600) {
    return new FinalFailure(
      'MAIL_REFUSED',
      `The mail server refused it: ${oneLine(response ?? message ?? '')}`,
    );
  }
  return new Error(`The mail server could not take it: ${oneLine(response ?? message ?? String(cause))}`, {
    cause,
  });
}

const oneLine = (text: string): string => text.replace(/\s+/g, ' ').trim().slice(0, 300);
