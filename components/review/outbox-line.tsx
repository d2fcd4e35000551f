'use client';

import { Button } from '@/components/ui/button';
import { ErrorState } from '@/components/ui/page-states';
import { countOf } from '@/lib/format/count';
import { VERDICT_WORDS } from '@/lib/review/verdict-words';
import type { OutboxState, VerdictOutbox } from './verdict-outbox';

/** What is still on its way, and what the server refused, with its sentence. */
export function OutboxLine({ state, outbox }: { state: OutboxState; outbox: VerdictOutbox }) {
  const { waiting, refused, trouble } = state;
  return (
    <div role="status" className="text-note text-ink-2 empty:hidden" data-waiting={waiting.length}>
      {trouble ? (
        <p className="border-t-[1.5px] border-dashed border-ink py-1 text-ink">
          {trouble} {countOf(waiting.length, 'verdict waits', 'verdicts wait')}.
        </p>
      ) : null}
      {refused.map((item) => (
        <div key={item.id} className="py-1">
          <ErrorState
            what={`“${VERDICT_WORDS[item.verdict]}” on candidate ${item.event} was not stored.`}
            action={<Button onClick={() => outbox.dismiss(item.id)}>I have read this</Button>}
          >
            {item.sentence}
          </ErrorState>
        </div>
      ))}
    </div>
  );
}
