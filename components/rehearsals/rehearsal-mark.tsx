import Link from 'next/link';
import type { RehearsalMark as Mark } from '@/lib/views/common';

const WORDS = { simulated: 'simulated', planted: 'particles planted' } as const;

/** Says of a recording or an analysis that it was made for a rehearsal; nothing where a camera took it. */
export function RehearsalMark({ rehearsal }: { rehearsal: Mark | null }) {
  if (!rehearsal) return null;
  return (
    <span className="block text-small text-ink-2">
      <span
        aria-hidden="true"
        className="mr-[6px] inline-block w-4 border-t-[1.5px] border-dashed border-ink-2 align-middle"
      />
      <Link href={`/rehearsals/${rehearsal.id}`}>Rehearsal</Link>, {WORDS[rehearsal.kind]}
    </span>
  );
}

/** The same as a sentence at the head of a page. */
export function RehearsalLine({ rehearsal }: { rehearsal: Mark | null }) {
  if (!rehearsal) return null;
  const what =
    rehearsal.kind === 'simulated'
      ? 'every frame is simulated, nothing here was measured'
      : 'particles of known truth were planted in the frames of a real recording';
  return (
    <p className="mb-3 border-y-[1.5px] border-dashed border-ink-2 py-2 text-note">
      <span className="font-strong">Made for a rehearsal</span>,{' '}
      <Link href={`/rehearsals/${rehearsal.id}`}>{rehearsal.name}</Link>: {what}. It takes no part in the
      laboratory’s results and comparisons.
    </p>
  );
}
