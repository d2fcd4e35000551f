import { Button } from '@/components/ui/button';
import { Moment } from '@/components/ui/moment';

/** A version that somebody else has stored while this one was being typed. */
export interface StoredVersion {
  revision: number;
  at: string;
}

/** Two people have changed the same: nothing is lost before the one who comes later has chosen. */
export function ConflictChoice({
  stored,
  busy,
  onMine,
  onTheirs,
}: {
  stored: StoredVersion;
  busy: boolean;
  onMine: () => void;
  onTheirs: () => void;
}) {
  return (
    <div className="pt-2" role="group" aria-label="Two versions">
      <p className="max-w-[60ch] text-note text-ink-2">
        The stored version is of <Moment at={stored.at} />. Keep what you typed, and it takes that
        version&rsquo;s place; or take theirs, and what you typed is dropped. The audit trail has both.
      </p>
      <div className="flex flex-wrap gap-2 pt-2">
        <Button busy={busy} onClick={onMine}>
          Keep mine
        </Button>
        <Button onClick={onTheirs}>Take theirs</Button>
      </div>
    </div>
  );
}
