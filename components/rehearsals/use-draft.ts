'use client';

import { useEffect, useRef, useState } from 'react';
import type { RehearsalDraft } from '@/lib/schemas/rehearsal';

/** What is typed is kept once nothing has been typed for so long. */
const PAUSE_MS = 1_200;

export type DraftState = 'untouched' | 'typing' | 'kept' | 'not kept';

/** Keeps a draft on the server while it is typed; the first one is not kept before anything was changed. */
export function useDraft(
  draft: RehearsalDraft,
  keep: (draft: RehearsalDraft) => Promise<boolean>,
): DraftState {
  const text = JSON.stringify(draft);
  const kept = useRef(text);
  const [state, setState] = useState<DraftState>('untouched');
  useEffect(() => {
    if (text === kept.current) return;
    const timer = setTimeout(() => {
      kept.current = text;
      keep(JSON.parse(text) as RehearsalDraft)
        .then((done) => setState(done ? 'kept' : 'not kept'))
        .catch(() => setState('not kept'));
    }, PAUSE_MS);
    return () => clearTimeout(timer);
  }, [text, keep]);
  return state;
}
