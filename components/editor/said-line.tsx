'use client';

import type { EditSession } from './edit-session';
import { useEdit } from './use-edit';

/** What was done last, or why it could not be; read out as it changes. */
export function SaidLine({ session }: { session: EditSession }) {
  const message = useEdit(session.state, (state) => state.message);
  return (
    <p
      role="status"
      aria-live="polite"
      aria-atomic="true"
      className={`min-h-[26px] pb-[6px] text-note ${message?.tone === 'refusal' ? 'text-red-text' : 'text-ink-2'}`}
    >
      {/* The number makes a repeated sentence a new text, which is read again. */}
      <span key={message?.number}>{message?.text ?? 'Click on a track, or press the full stop key.'}</span>
    </p>
  );
}

/** Keys and what they do, side by side. */
export function KeyList({ keys }: { keys: readonly { keys: string; does: string }[] }) {
  return (
    <dl className="flex flex-wrap gap-x-5 gap-y-1 pb-1 text-small text-ink-2">
      {keys.map(({ keys: caps, does }) => (
        <div key={caps} className="flex gap-[6px]">
          <dt className="text-ink">{caps}</dt>
          <dd>{does}</dd>
        </div>
      ))}
    </dl>
  );
}
