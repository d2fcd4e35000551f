import type { ReactNode } from 'react';

export interface FieldWords {
  label: ReactNode;
  /** Stands under the field while there is nothing to warn of. */
  help?: ReactNode;
  /** What is wrong and what to enter. */
  error?: string | null;
  /** What may go wrong with this value; it can be saved all the same. */
  warning?: ReactNode;
  /** Hides the label from sight, where a heading already says it. */
  hideLabel?: boolean;
}

/** Border of a field's box by its state; error and warning have a 2 px foot as well as the hue. */
export function boxClasses({ error, warning }: Pick<FieldWords, 'error' | 'warning'>): string {
  const shared = 'rounded-field border bg-leaf transition-colors duration-quick';
  if (error) return `${shared} border-red shadow-[inset_0_-2px_0_var(--red)]`;
  if (warning) return `${shared} border-amber shadow-[inset_0_-2px_0_var(--amber)]`;
  return `${shared} border-line-strong hover:border-ink`;
}

/** The one line under a field that matters most now: error before warning before help. */
export function messageOf({ error, warning, help }: Pick<FieldWords, 'error' | 'warning' | 'help'>) {
  if (error) return { tone: 'text-red-text', words: error };
  if (warning) return { tone: 'text-amber-text', words: warning };
  return help ? { tone: 'text-ink-3', words: help } : null;
}

/** Label above, control, message under; the control takes `aria-describedby={messageId}`. */
export function FieldFrame({
  id,
  messageId,
  label,
  hideLabel = false,
  className = '',
  children,
  ...words
}: FieldWords & { id: string; messageId: string; className?: string; children: ReactNode }) {
  const message = messageOf(words);
  return (
    <div className={`flex min-w-0 flex-col gap-[3px] ${className}`}>
      <label htmlFor={id} className={hideLabel ? 'sr-only' : 'text-small text-ink-2'}>
        {label}
      </label>
      {children}
      {message ? (
        <p id={messageId} className={`text-small ${message.tone}`}>
          {message.words}
        </p>
      ) : null}
    </div>
  );
}

/** Props that tie a control to its message. */
export function describedBy(words: FieldWords, messageId: string) {
  return {
    'aria-describedby': messageOf(words) ? messageId : undefined,
    'aria-invalid': words.error ? true : undefined,
  };
}
