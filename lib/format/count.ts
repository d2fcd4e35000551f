const THIN_SPACE = '\u2009';
const MINUS = '\u2212';

/** Puts a thin space every three digits before the point and a real minus in front: `-13020.5` -> `−13 020.5`. */
export function groupDigits(plain: string): string {
  const [, sign = '', whole = '', rest = ''] = /^(-?)(\d+)(.*)$/.exec(plain) ?? [];
  if (whole === '') return plain;
  return (sign ? MINUS : '') + whole.replace(/\B(?=(\d{3})+$)/g, THIN_SPACE) + rest;
}

/** A whole number for people; empty for what is unknown (null, NaN, infinite). */
export function formatCount(value: number | null | undefined): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return '';
  return groupDigits(Math.round(value).toFixed(0));
}

/** `1 frame`, `13 020 frames`; give the plural where it isn't the word with an s. */
export function countOf(count: number, one: string, many = `${one}s`): string {
  return `${formatCount(count)} ${Math.round(count) === 1 ? one : many}`;
}
