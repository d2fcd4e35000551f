import { formatMoment, type TimeOptions } from '@/lib/format/time';

/** A moment in the laboratory's zone; the exact UTC time stands in the title. */
export function Moment({ at, zone, now }: { at: Date | string } & TimeOptions) {
  const iso = new Date(at).toISOString();
  return (
    <time dateTime={iso} title={iso} className="whitespace-nowrap tabular-nums">
      {formatMoment(at, { zone, now })}
    </time>
  );
}
