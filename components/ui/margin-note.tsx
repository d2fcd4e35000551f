import type { ReactNode } from 'react';
import { StateBead, type BeadState } from './state-bead';

export type NoteTone = 'plain' | 'warning' | 'caution' | 'stale' | 'good';

const HEADS: Record<NoteTone, { glyph: BeadState | null; text: string; tick: string }> = {
  plain: { glyph: null, text: '', tick: 'before:bg-line-strong' },
  warning: { glyph: 'warning', text: 'text-amber-text', tick: 'before:h-[2px] before:bg-amber' },
  caution: { glyph: 'caution', text: 'text-red-text', tick: 'before:h-[2px] before:bg-red' },
  stale: { glyph: 'stale', text: '', tick: 'before:bg-line-strong' },
  good: { glyph: 'done', text: 'text-green-text', tick: 'before:h-[2px] before:bg-green' },
};

interface MarginNoteProps {
  title: ReactNode;
  tone?: NoteTone;
  children?: ReactNode;
  /** Ties the note to the element whose `data-tie-from` has the same value (`QuantityRow tie=...`). */
  tie?: string;
  /** The note is repeated beside its row by `RowNote` where the margin has gone under the page. */
  repeatedAtRow?: boolean;
}

/** A note hung in the margin from the column's thread. */
export function MarginNote({ title, tone = 'plain', children, tie, repeatedAtRow }: MarginNoteProps) {
  const { glyph, text, tick } = HEADS[tone];
  return (
    <div
      data-tie-to={tie}
      className={`relative break-inside-avoid pb-[18px] text-note aside:before:absolute aside:before:-left-6 aside:before:top-[9px] aside:before:h-px aside:before:w-[14px] aside:before:content-[''] ${tick} ${repeatedAtRow ? 'max-aside:hidden' : ''}`}
    >
      <h3 className={`flex items-center gap-[7px] font-strong ${text}`}>
        {glyph ? <StateBead state={glyph} /> : null}
        {title}
      </h3>
      {children}
    </div>
  );
}

/** The words of a tied note under their row (`QuantityRow note={...}`), only where the margin isn't beside it. */
export function RowNote({
  title,
  tone = 'warning',
  children,
}: Omit<MarginNoteProps, 'tie' | 'repeatedAtRow'>) {
  const { glyph, text } = HEADS[tone];
  return (
    <div className="py-2 text-note text-ink aside:hidden">
      <p className={`flex items-center gap-[7px] font-strong ${text}`}>
        {glyph ? <StateBead state={glyph} /> : null}
        {title}
      </p>
      {children}
    </div>
  );
}
