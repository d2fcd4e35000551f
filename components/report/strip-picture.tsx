'use client';

import { useEffect, useState } from 'react';

/** Strips are composed by a worker when somebody first asks for them: seconds. */
const ASK_AGAIN_MS = 3_000;
const ASKS_MOST = 40;

interface StripPictureProps {
  candidateId: string;
  /** What the picture shows, for those who don't see it. */
  words: string;
}

/** The strip of a candidate; asked for again while it is being composed. */
export function StripPicture({ candidateId, words }: StripPictureProps) {
  const [asks, setAsks] = useState(1);
  const [state, setState] = useState<'waiting' | 'there' | 'failed'>('waiting');
  const waits = state === 'failed' && asks < ASKS_MOST;
  useEffect(() => {
    if (!waits) return;
    const timer = setTimeout(() => {
      setAsks((before) => before + 1);
      setState('waiting');
    }, ASK_AGAIN_MS);
    return () => clearTimeout(timer);
  }, [waits, asks]);
  return (
    <div className="min-h-[120px] min-w-[640px] bg-well print:min-w-0">
      {state === 'failed' ? (
        <p className="p-3 text-note text-ink-2" role="status">
          {waits ? 'The frames are being put together …' : 'These frames can’t be shown.'}
        </p>
      ) : (
        // Next's own images are for pictures that ship with the site.
        // eslint-disable-next-line @next/next/no-img-element
        <img
          key={asks}
          ref={(image) => {
            // A picture that came before the page was alive tells nothing any more.
            if (image?.complete) setState(image.naturalWidth > 0 ? 'there' : 'failed');
          }}
          src={`/api/v1/candidates/${candidateId}/strip?ask=${asks}`}
          alt={words}
          className="block w-full"
          onLoad={() => setState('there')}
          onError={() => setState('failed')}
        />
      )}
    </div>
  );
}
