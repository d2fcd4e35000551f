/**
 * Moments for people. Stored times are UTC; what is shown names its zone. The zone comes in from
 * outside (a laboratory's IANA zone), so that server and browser write the same text.
 */
export interface TimeOptions {
  /** IANA name, e.g. `Europe/Berlin`; unknown names fall back to UTC. */
  zone?: string;
  /** Now, for leaving out the day of a moment of today. */
  now?: Date | string | number;
}

export type Moment = Date | string | number;

const formatters = new Map<string, Intl.DateTimeFormat>();

function formatter(zone: string): Intl.DateTimeFormat {
  let found = formatters.get(zone);
  if (!found) {
    const options: Intl.DateTimeFormatOptions = {
      timeZone: zone,
      year: 'numeric',
      month: 'short',
      day: 'numeric',
      hour: '2-digit',
      minute: '2-digit',
      hourCycle: 'h23',
      timeZoneName: 'short',
    };
    try {
      found = new Intl.DateTimeFormat('en-GB', options);
    } catch {
      found = new Intl.DateTimeFormat('en-GB', { ...options, timeZone: 'UTC' });
    }
    formatters.set(zone, found);
  }
  return found;
}

function parts(at: Moment, zone: string) {
  const date = new Date(at);
  if (Number.isNaN(date.getTime())) return null;
  const named = Object.fromEntries(
    formatter(zone)
      .formatToParts(date)
      .map((part) => [part.type, part.value]),
  );
  return {
    day: `${named.day} ${named.month} ${named.year}`,
    clock: `${named.hour}:${named.minute}`,
    zone: named.timeZoneName,
  };
}

/** `3 Mar 2025, 09:41 CET`, or `09:41 CET` on the day of `now`. Empty for what isn't a time. */
export function formatMoment(at: Moment, { zone = 'UTC', now }: TimeOptions = {}): string {
  const shown = parts(at, zone);
  if (!shown) return '';
  const today = now !== undefined && parts(now, zone)?.day === shown.day;
  return `${today ? '' : `${shown.day}, `}${shown.clock} ${shown.zone}`;
}

/** `3 Mar 2025`, the calendar day in the zone. */
export function formatDay(at: Moment, zone = 'UTC'): string {
  return parts(at, zone)?.day ?? '';
}

/** `09:41`, without the zone: only beside a full time of the same zone. */
export function formatClock(at: Moment, zone = 'UTC'): string {
  return parts(at, zone)?.clock ?? '';
}
