'use client';

import type { RefObject } from 'react';
import { KeyCap } from '@/components/ui/button';
import { REVIEW_ACTIONS, type ReviewKeys } from '@/lib/review/review-keys';
import { REASONS, VERDICT_WORDS, VERDICTS, type Verdict } from '@/lib/review/verdict-words';

export interface Draft {
  /** Chosen, and waiting for its reason. */
  verdict: Verdict | null;
  reason: string;
  note: string;
  /** Whether the reason is written out. */
  inWords: boolean;
}

interface VerdictPanelProps {
  question: string;
  keys: ReviewKeys;
  draft: Draft;
  /** What holds already. */
  said: Verdict | null;
  onVerdict: (verdict: Verdict) => void;
  onReason: (reason: string) => void;
  onInWords: () => void;
  onDraft: (change: Partial<Draft>) => void;
  onCommit: () => void;
  noteField: RefObject<HTMLTextAreaElement | null>;
}

const shown = (key: string) => key.toUpperCase();

/**
 * Three verdicts of the same weight and without colour, then the reasons, each with its key. Where the window has no
 * room for a column they stand at its foot, the reasons above them once they are asked for.
 */
export function VerdictPanel(props: VerdictPanelProps) {
  const { question, keys, draft, said, onVerdict, onReason, onInWords, onDraft, onCommit } = props;
  const { noteField } = props;
  const asks = draft.verdict !== null && draft.verdict !== 'yes';
  return (
    <section aria-labelledby="verdict-question">
      <h2 id="verdict-question" className="font-serif text-head2 font-strong">
        {question}
      </h2>
      <div className="foot-bar max-desk:fixed max-desk:inset-x-0 max-desk:bottom-0 max-desk:z-10 max-desk:flex max-desk:max-h-[70vh] max-desk:flex-col-reverse max-desk:overflow-y-auto max-desk:border-t max-desk:border-line-strong max-desk:bg-paper max-desk:px-sheet-x-narrow max-desk:pb-2">
        <div role="group" aria-label="Verdict" className="grid grid-cols-3 gap-2 pt-3 max-desk:pt-2">
          {VERDICTS.map((verdict) => {
            const chosen = (draft.verdict ?? said) === verdict;
            return (
              <button
                key={verdict}
                type="button"
                aria-pressed={chosen}
                onClick={() => onVerdict(verdict)}
                className={`flex h-11 items-center justify-center gap-2 whitespace-nowrap rounded-button border text-[15px] font-title ${chosen ? 'border-ink bg-ink text-paper' : 'border-ink-2 hover:border-ink hover:bg-leaf'}`}
              >
                <KeyCap>{shown(keys[verdict])}</KeyCap>
                {VERDICT_WORDS[verdict]}
              </button>
            );
          })}
        </div>
        <div className={asks ? '' : 'max-desk:hidden'}>
          <h3 className="pb-1 pt-[14px] text-note font-strong">
            Because <span className="font-text text-ink-2">(asked for “no” and “can’t tell”)</span>
          </h3>
          <ul className="flex flex-col">
            {REASONS.map(({ key, words }) => (
              <li key={key}>
                <button
                  type="button"
                  disabled={!asks}
                  aria-pressed={draft.reason === words}
                  onClick={() => onReason(words)}
                  className="flex min-h-[28px] w-full items-center gap-[10px] py-[2px] text-left enabled:hover:bg-leaf disabled:text-ink-2 pointer-coarse:min-h-11"
                >
                  <KeyCap>{shown(keys[key])}</KeyCap>
                  {words}
                </button>
              </li>
            ))}
            <li>
              <button
                type="button"
                disabled={!asks}
                aria-expanded={draft.inWords}
                onClick={onInWords}
                className="flex min-h-[28px] w-full items-center gap-[10px] py-[2px] text-left enabled:hover:bg-leaf disabled:text-ink-2 pointer-coarse:min-h-11"
              >
                <KeyCap>{shown(keys.other)}</KeyCap>
                other, in words
              </button>
            </li>
          </ul>
          {draft.inWords && asks ? (
            <label className="block pt-2 text-small text-ink-2">
              Reason, then Enter
              <input
                // With the field itself, so that no letter typed right after the key is taken for another key.
                autoFocus
                value={draft.reason}
                maxLength={200}
                onChange={(event) => onDraft({ reason: event.target.value })}
                onKeyDown={(event) => {
                  if (event.key === 'Enter') onCommit();
                  if (event.key === 'Escape') event.currentTarget.blur();
                }}
                className="mt-[2px] block h-10 w-full rounded-field border border-line-strong bg-leaf px-[9px] text-body text-ink hand:h-control"
              />
            </label>
          ) : null}
          <p role="status" className="min-h-5 pt-1 text-small text-ink-2">
            {asks
              ? `${VERDICT_WORDS[draft.verdict!]}: choose the reason, or Enter without one; Esc takes it back.`
              : ''}
          </p>
        </div>
      </div>
      <label className="block text-small text-ink-2">
        <span className="flex items-center gap-2">
          <KeyCap>{shown(keys.note)}</KeyCap> Note, goes with the verdict
        </span>
        <textarea
          ref={noteField}
          rows={2}
          maxLength={2000}
          value={draft.note}
          onChange={(event) => onDraft({ note: event.target.value })}
          onKeyDown={(event) => {
            if (event.key === 'Escape') event.currentTarget.blur();
          }}
          aria-label={REVIEW_ACTIONS.note.words}
          className="mt-1 block min-h-12 w-full rounded-field border border-line-strong bg-leaf px-[9px] py-[5px] text-body text-ink"
        />
      </label>
    </section>
  );
}
