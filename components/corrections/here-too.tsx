'use client';

import { useEffect, useState } from 'react';
import { api } from '@/components/data/api-client';
import { analysisPath } from '@/components/data/use-analysis';
import { formatCount } from '@/lib/format/count';
import type { PresenceView } from '@/lib/views/correction-view';

/** The server forgets whoever was silent for 30 s. */
const EVERY_MS = 10_000;

const PLACES: Record<string, string> = {
  analysis: 'on the analysis page',
  verdicts: 'judging candidates',
  history: 'in the history',
};

const words = ({ person, place, frame }: PresenceView): string =>
  place === 'editor'
    ? `${person.name} correcting tracks${frame === null ? '' : ` at frame ${formatCount(frame)}`}`
    : `${person.name} ${PLACES[place] ?? ''}`.trimEnd();

interface HereTooProps {
  analysisId: string;
  /** Where this person is. */
  place: 'analysis' | 'verdicts' | 'history';
}

/** Tells others that this person has the analysis open, and says who else has and what they do; nothing while alone. */
export function HereToo({ analysisId, place }: HereTooProps) {
  const [people, setPeople] = useState<readonly PresenceView[]>([]);
  useEffect(() => {
    let left = false;
    const beat = async () => {
      // A page that nobody looks at is no presence.
      if (document.hidden) return;
      const path = `${analysisPath(analysisId)}/presence`;
      const answer = await api<{ items: PresenceView[] }>(path, { method: 'POST', body: { place } }).catch(
        () => null,
      );
      if (!left && answer) setPeople(answer.items);
    };
    const again = () => void beat();
    const timer = setInterval(again, EVERY_MS);
    document.addEventListener('visibilitychange', again);
    again();
    return () => {
      left = true;
      clearInterval(timer);
      document.removeEventListener('visibilitychange', again);
    };
  }, [analysisId, place]);
  return (
    <p role="status" className={people.length === 0 ? 'sr-only' : 'pb-2 text-note text-ink-2'}>
      {people.length === 0 ? '' : `Here too: ${people.map(words).join(', ')}.`}
    </p>
  );
}
