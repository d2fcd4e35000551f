import { headerText } from './header-text';
import type { MailWords } from './mail-words';

export interface RenderedMail {
  subject: string;
  text: string;
  html: string;
}

const TEXT_WIDTH = 76;

/** Plain text and HTML of the same words. Whatever names hold, they stay text. */
export function renderMail(
  words: MailWords,
  name: string,
  /** Names of the pictures that travel with the mail; others are left out. */
  attached: readonly string[] = [],
): RenderedMail {
  const html = htmlText(words, name, attached);
  return { subject: headerText(words.subject), text: plainText(words, name), html };
}

function plainText({ paragraphs, action, foot }: MailWords, name: string): string {
  const parts = [`${headerText(name)},`, ...paragraphs.map(clean).map(wrap)];
  if (action) parts.push(`${action.label}:\n${action.url}`);
  // "-- " alone on a line begins what readers show apart (RFC 3676, 4.3).
  parts.push(`-- \n${wrap(clean(foot))}`);
  return `${parts.join('\n\n')}\n`;
}

/** Control marks have no place in a text either; line ends become spaces, so that nobody can fake a paragraph. */
const clean = (text: string): string => text.replace(/[\p{Cc}\p{Zl}\p{Zp}]+/gu, ' ').trim();

function wrap(text: string): string {
  const lines: string[] = [];
  let line = '';
  for (const word of text.split(' ')) {
    if (line !== '' && line.length + 1 + word.length > TEXT_WIDTH) {
      lines.push(line);
      line = word;
    } else line = line === '' ? word : `${line} ${word}`;
  }
  return [...lines, line].join('\n');
}

const INK = '#14212A';
const QUIET = '#43535B';

/**
 * HTML as mail readers know it: tables, styles on the elements, no script, nothing from elsewhere. The
 * thread above the words is two borders and a bead of text.
 */
function htmlText(
  { subject, paragraphs, pictures, action, foot }: MailWords,
  name: string,
  attached: readonly string[],
): string {
  const p = (text: string) => `<p style="margin:0 0 14px">${escapeHtml(clean(text))}</p>`;
  // `cid:` names a part of the same mail (RFC 2392): nothing is fetched from elsewhere.
  const images = (pictures ?? [])
    .filter((picture) => attached.includes(picture.name))
    .map(
      (picture) =>
        `<p style="margin:0 0 14px"><img src="cid:${escapeHtml(picture.name)}" alt="${escapeHtml(picture.alt)}" style="display:block;max-width:100%;height:auto"></p>`,
    )
    .join('\n');
  const button = action
    ? `<p style="margin:20px 0 6px"><a href="${escapeHtml(action.url)}" style="display:inline-block;padding:9px 16px;background:${INK};color:#F2F5F4;border-radius:3px;text-decoration:none;font-weight:600">${escapeHtml(action.label)}</a></p>
<p style="margin:0 0 14px;font-size:12px;color:${QUIET};word-break:break-all">${escapeHtml(action.url)}</p>`
    : '';
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>${escapeHtml(headerText(subject))}</title></head>
<body style="margin:0;background:#F2F5F4;color:${INK};font:15px/22px 'Source Sans 3',Helvetica,Arial,sans-serif">
<table role="presentation" width="100%" cellspacing="0" cellpadding="0"><tr><td style="padding:24px 16px">
<table role="presentation" cellspacing="0" cellpadding="0" style="max-width:560px;margin:0 auto"><tr><td>
<p style="margin:0 0 18px;padding-bottom:8px;border-bottom:2px solid ${INK};font:600 18px/24px 'STIX Two Text',Georgia,serif">Beadline</p>
${p(`${name},`)}
${paragraphs.map(p).join('\n')}
${images}
${button}
<p style="margin:22px 0 0;padding-top:10px;border-top:1px solid #CFD8D6;font-size:12px;line-height:17px;color:${QUIET}">${escapeHtml(clean(foot))}</p>
</td></tr></table>
</td></tr></table>
</body></html>
`;
}

const ENTITIES: Record<string, string> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};
const escapeHtml = (text: string): string => text.replace(/[&<>"']/g, (mark) => ENTITIES[mark]);
