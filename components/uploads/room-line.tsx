import { formatBytes, formatBytesOf } from '@/lib/format/bytes';

/** What the laboratory keeps of what it may keep: who sends a large stack sees before whether it fits. */
export function RoomLine({ keptBytes, quotaBytes }: { keptBytes: number; quotaBytes: number }) {
  const left = Math.max(0, quotaBytes - keptBytes);
  return (
    <p className={`pt-2 text-note ${left < NEARLY * quotaBytes ? 'text-amber-text' : 'text-ink-3'}`}>
      This laboratory keeps {formatBytesOf(Math.min(keptBytes, quotaBytes), quotaBytes)}; {formatBytes(left)}{' '}
      left for stacks.
    </p>
  );
}

/** Below this share the line is amber. */
const NEARLY = 0.1;
