interface Share {
  value: number | null;
  low: number;
  high: number;
}

/** `93 %`; one decimal where everything but a little is meant. */
export function percentText(share: number | null): string {
  if (share === null || !Number.isFinite(share)) return 'not known';
  const percent = 100 * share;
  const fine = percent > 99 && percent < 100;
  return `${fine ? percent.toFixed(1) : percent.toFixed(0)} %`;
}

/** `93 % (91 to 96 %)`. */
export function shareText({ value, low, high }: Share): string {
  return `${percentText(value)} (${(100 * low).toFixed(0)} to ${(100 * high).toFixed(0)} %)`;
}
