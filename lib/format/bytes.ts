const UNITS = ['B', 'kB', 'MB', 'GB', 'TB', 'PB'];

/**
 * Bytes in powers of 1000 with three digits: `{ number: '25.4', unit: 'GB' }`. Never shows 1000 of a
 * unit where 1 of the next is meant. Null for what is unknown.
 */
export function bytesParts(bytes: number | null | undefined): { number: string; unit: string } | null {
  if (bytes === null || bytes === undefined || !Number.isFinite(bytes) || bytes < 0) return null;
  let rank = 0;
  let size = bytes;
  while (rank < UNITS.length - 1 && size >= (rank === 0 ? 1000 : 999.5)) {
    size /= 1000;
    rank += 1;
  }
  if (rank === 0) return { number: String(Math.round(size)), unit: 'B' };
  const decimals = size >= 99.95 ? 0 : size >= 9.995 ? 1 : 2;
  return { number: size.toFixed(decimals), unit: UNITS[rank] };
}

/** `25.4 GB`; empty for what is unknown. */
export function formatBytes(bytes: number | null | undefined): string {
  const parts = bytesParts(bytes);
  return parts ? `${parts.number} ${parts.unit}` : '';
}

/** `7.7 of 24.6 GB`: both in the unit of the whole. */
export function formatBytesOf(done: number, total: number): string {
  const whole = bytesParts(total);
  if (!whole) return formatBytes(done);
  const per = 1000 ** UNITS.indexOf(whole.unit);
  const decimals = whole.number.split('.')[1]?.length ?? 0;
  // Rounding down: "24.6 of 24.6" may only be said when all of it is there.
  const factor = 10 ** decimals;
  const shown = done >= total ? whole.number : (Math.floor((done / per) * factor) / factor).toFixed(decimals);
  return `${shown} of ${whole.number} ${whole.unit}`;
}
