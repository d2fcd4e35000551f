import type { StripState } from '@/lib/report/events';

interface StripPictureProps {
  candidateId: string;
  state: StripState;
  /** What the picture shows, for those who don't see it. */
  words: string;
}

/** The strip of a candidate, or why there is none to see. */
export function StripPicture({ candidateId, state, words }: StripPictureProps) {
  if (state !== 'there') {
    return (
      <p className="border-y border-line py-6 text-note text-ink-2">
        {state === 'composing' ? 'The frames are being put together …' : 'The frames can no longer be shown.'}
      </p>
    );
  }
  return (
    <div className="min-w-[640px] print:min-w-0">
      {/* Next's own images are for pictures that ship with the site. */}
      {/* eslint-disable-next-line @next/next/no-img-element */}
      <img src={`/api/v1/candidates/${candidateId}/strip`} alt={words} className="block w-full" />
    </div>
  );
}
