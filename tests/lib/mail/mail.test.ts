import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { mailSettings } from '@/lib/mail-settings';
import { headerText, isPlainAddress } from '@/lib/mail/header-text';
import { mailWords, type MailContext } from '@/lib/mail/mail-words';
import { renderMail } from '@/lib/mail/render-mail';

const CONTEXT: MailContext = {
  site: 'https://lab.test',
  name: 'Ada Reed',
  labName: 'Hollow Reach',
  link: { url: 'https://lab.test/invitation/abc', until: '8 Dec 2026, 10:00 UTC' },
};
const done = { kind: 'analysis-done', analysisId: 'id', recordingName: 'a.tif', runName: 'Run 1' } as const;

describe('words of a mail', () => {
  it('are the same in plain text and in HTML, with the link in both', () => {
    const { text, html, subject } = renderMail(
      mailWords({ kind: 'invitation', byName: 'Io Lund' }, CONTEXT),
      'Ada Reed',
    );
    expect(subject).toBe('Your invitation to Hollow Reach');
    for (const body of [text, html]) {
      for (const part of ['Ada Reed', 'Io Lund', CONTEXT.link!.url, 'It ends 8 Dec 2026']) {
        expect(body.replace(/\s+/g, ' ')).toContain(part);
      }
    }
  });

  it('have lines of at most 78 characters in plain text, but for an address of the net', () => {
    // RFC 5322, 2.1.1: each line should be no more than 78 characters.
    const { text } = renderMail(
      mailWords({ ...done, recordingName: 'long name '.repeat(15) }, CONTEXT),
      'Ada',
    );
    const long = text.split('\n').filter((line) => line.length > 78 && !line.startsWith('https://'));
    expect(long).toEqual([]);
  });

  it('stay text in HTML, whatever names hold', () => {
    const evil = `<img src=x onerror=alert(1)>"'&`;
    const { html } = renderMail(
      mailWords({ ...done, recordingName: evil, runName: evil }, { ...CONTEXT, labName: evil }),
      evil,
    );
    expect(html).not.toContain('<img');
    expect(html).toContain('&lt;img src=x onerror=alert(1)&gt;&quot;&#39;&amp;');
  });

  it('load nothing from elsewhere: no picture, no style sheet, no script', () => {
    const { html } = renderMail(mailWords(done, CONTEXT), 'Ada');
    expect(html).not.toMatch(/<(img|link|script|iframe)\b|url\(|@import/);
  });

  it('of a mail that opens an account can’t be made without its link', () => {
    expect(() => mailWords({ kind: 'password-reset', byName: null }, { ...CONTEXT, link: null })).toThrow(
      /link/,
    );
  });
});

describe('text in a header', () => {
  // RFC 5322, 2.2: a header ends with CRLF; a bare CR or LF must not get in either.
  it.each([
    ['Run 1\r\nBcc: all@evil.test', 'Run 1 Bcc: all@evil.test'],
    ['a\nb', 'a b'],
    ['a\u2028b\u0085c', 'a b c'],
    ['a\u0000b\u202eb', 'a b b'],
  ])('%j is one line', (text, line) => expect(headerText(text)).toBe(line));

  it('never holds a control mark, for any text', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary', maxLength: 400 }), (text) => {
        expect(headerText(text)).not.toMatch(/[\u0000-\u001f\u007f-\u009f\u2028\u2029]/);
      }),
      { seed: 7, numRuns: 500 },
    );
  });
});

describe('an address', () => {
  it.each(['ada.reed+lab@lab.test', 'a@b', 'ünter@bücher.test'])('%s can be sent to', (address) =>
    expect(isPlainAddress(address)).toBe(true),
  );
  it.each([
    'a@lab.test, b@evil.test',
    'a@lab.test\r\nRCPT TO:<b@evil.test>',
    '<a@lab.test>',
    '"a b"@lab.test',
    'a b@lab.test',
    'a@b@c.test',
    '',
    `${'a'.repeat(250)}@lab.test`,
  ])('%j is none', (address) => expect(isPlainAddress(address)).toBe(false));
});

describe('settings of mail', () => {
  it('without any, mail stays here', () => {
    expect(mailSettings({} as NodeJS.ProcessEnv)).toMatchObject({
      smtpUrl: null,
      from: { name: 'Beadline' },
    });
  });

  it.each([
    ['Our lab <lab@example.test>', { name: 'Our lab', address: 'lab@example.test' }],
    ['"Our, lab" <lab@example.test>', { name: 'Our, lab', address: 'lab@example.test' }],
    ['lab@example.test', { name: 'Beadline', address: 'lab@example.test' }],
  ])('the sender %j is understood', (from, sender) => {
    const env = { BEADLINE_SMTP_URL: 'smtps://u:p@mail.test', BEADLINE_MAIL_FROM: from };
    expect(mailSettings(env as unknown as NodeJS.ProcessEnv).from).toEqual(sender);
  });

  it.each([
    [{ BEADLINE_SMTP_URL: 'http://secret@mail.test', BEADLINE_MAIL_FROM: 'a@b.test' }, /BEADLINE_SMTP_URL/],
    [{ BEADLINE_SMTP_URL: 'mail.test', BEADLINE_MAIL_FROM: 'a@b.test' }, /BEADLINE_SMTP_URL/],
    [{ BEADLINE_SMTP_URL: 'smtp://mail.test' }, /BEADLINE_MAIL_FROM/],
    [{ BEADLINE_MAIL_FROM: 'a@b.test\r\nBcc: c@d.test' }, /BEADLINE_MAIL_FROM/],
    [{ BEADLINE_MAIL_FROM: 'nobody' }, /BEADLINE_MAIL_FROM/],
  ])('%j is refused by name, and never printed with its password', (env, pattern) => {
    expect(() => mailSettings(env as unknown as NodeJS.ProcessEnv)).toThrow(pattern);
    expect(() => mailSettings(env as unknown as NodeJS.ProcessEnv)).not.toThrow(/secret/);
  });
});
