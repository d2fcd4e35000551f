import type { ReactNode } from 'react';
import { Chevron } from './choice';

interface FoldProps {
  title: ReactNode;
  children: ReactNode;
  open?: boolean;
  /** Told when the person opens or closes it; then `open` must follow. */
  onOpen?: (open: boolean) => void;
  className?: string;
}

/** Something that most people leave closed: its name with a chevron, the rest below when opened. */
export function Fold({ title, children, open, onOpen, className = '' }: FoldProps) {
  return (
    <details
      open={open}
      onToggle={onOpen ? (event) => onOpen(event.currentTarget.open) : undefined}
      className={`group text-note ${className}`}
    >
      <summary className="inline-flex min-h-6 items-center gap-[6px] text-ink-2 hover:text-ink pointer-coarse:min-h-11">
        {title}
        <Chevron className="group-open:rotate-180" />
      </summary>
      {children}
    </details>
  );
}
