/** Longer than any sentence that we put there; RFC 5322 asks for folding, which the library does. */
const HEADER_LENGTH_MAX = 300;

/**
 * Text that may stand in a header of a mail: one line, whatever names from the database hold. Marks that end a
 * line, or that hide or turn text, become a space.
 */
export function headerText(text: string): string {
  const oneLine = text
    .replace(/[\p{Cc}\p{Cf}\p{Zl}\p{Zp}]+/gu, ' ')
    .replace(/ {2,}/g, ' ')
    .trim();
  return [...oneLine].slice(0, HEADER_LENGTH_MAX).join('');
}

/**
 * An address as it stands in `To` and in the envelope: one mailbox and nothing else (RFC 5321, 4.1.2, without quoted
 * local parts, which nobody here has).
 */
export function isPlainAddress(address: string): boolean {
  return (
    address.length <= 254 &&
    /^[^\s\p{Cc}\p{Cf}"(),:;<>@[\\\]]+@[^\s\p{Cc}\p{Cf}"(),:;<>@[\\\]]+$/u.test(address)
  );
}
