const NUMBER = /^[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d+)?$/;
/** Digits parted in threes by thin or plain spaces, as the pages themselves print them. */
const SPACES = /[\s\u2009\u00a0\u202f]/g;

/**
 * A number as people type it; null for an empty field, NaN for anything that is not one number with
 * a decimal point. A comma is not taken for a point: `1,500` would mean two things.
 */
export function parseNumber(text: string): number | null {
  const bare = text.replace(SPACES, '').replace('\u2212', '-');
  if (bare === '') return null;
  if (!NUMBER.test(bare)) return Number.NaN;
  return Number(bare);
}
