/** What a spreadsheet takes for the beginning of a formula (OWASP, CSV injection). */
const FORMULA = /^[=+\-@\t\r]/;

/**
 * A cell of text that people wrote: quoted where RFC 4180 asks for it, and with an apostrophe before what a
 * spreadsheet would compute. Not for numbers, which begin with a minus in good faith.
 */
export function textCell(text: string | null): string {
  if (text === null) return '';
  const safe = FORMULA.test(text) ? `'${text}` : text;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}
