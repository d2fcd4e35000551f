const MINUTE_S = 60;
const HOUR_S = 3600;
const DAY_S = 86_400;

/**
 * A time span in at most two units: `0.8 s`, `12 s`, `3 min 20 s`, `3 h 12 min`, `2 d 4 h`; from ten
 * minutes on without seconds. Empty for what is unknown or negative.
 */
export function formatDuration(seconds: number | null | undefined): string {
  if (seconds === null || seconds === undefined || !Number.isFinite(seconds) || seconds < 0) return '';
  if (seconds < 9.95) return `${Number(seconds.toFixed(1))} s`;
  const whole = Math.round(seconds);
  if (whole < MINUTE_S) return `${whole} s`;
  if (whole < 10 * MINUTE_S) return pair(whole, MINUTE_S, 'min', 1, 's');
  const minutes = Math.round(seconds / MINUTE_S) * MINUTE_S;
  if (minutes < HOUR_S) return `${minutes / MINUTE_S} min`;
  if (minutes < DAY_S) return pair(minutes, HOUR_S, 'h', MINUTE_S, 'min');
  return pair(Math.round(seconds / HOUR_S) * HOUR_S, DAY_S, 'd', HOUR_S, 'h');
}

function pair(total: number, large: number, largeName: string, small: number, smallName: string): string {
  const rest = Math.floor((total % large) / small);
  return `${Math.floor(total / large)} ${largeName}${rest > 0 ? ` ${rest} ${smallName}` : ''}`;
}

/** What is left of a job, said as a guess: `about 20 min`, `less than a minute`. Empty when unknown. */
export function formatTimeLeft(seconds: number | null | undefined): string {
  if (seconds === null || seconds === undefined || !Number.isFinite(seconds) || seconds < 0) return '';
  if (seconds < MINUTE_S) return 'less than a minute';
  const minutes = seconds / MINUTE_S;
  const steps = minutes < 10 ? 1 : minutes < 60 ? 5 : 10;
  return `about ${formatDuration(Math.round(minutes / steps) * steps * MINUTE_S)}`;
}
