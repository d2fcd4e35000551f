import Link from 'next/link';
import type { ReactNode } from 'react';
import { Wordmark } from '@/components/ui/wordmark';

/** A page outside of any laboratory: the wordmark, a thread across the window, a few sentences. */
export function PlainPage({ title, children }: { title: string; children: ReactNode }) {
  return (
    <div className="min-h-screen pb-12">
      <header className="flex h-head items-center px-sheet-x-narrow hand:px-sheet-x">
        <Link href="/" className="no-underline hover:text-ink">
          <Wordmark />
        </Link>
      </header>
      {/* A thread with a bead that isn't there, across the window. */}
      <svg width="100%" height="18" aria-hidden="true" className="mt-6 block">
        <line x1="0" x2="100%" y1="9" y2="9" className="stroke-line" />
        <line x1="0" x2="172" y1="9" y2="9" className="stroke-ink" strokeWidth="1.5" />
        <circle
          cx="172"
          cy="9"
          r="5"
          className="fill-paper stroke-ink"
          strokeWidth="1.5"
          strokeDasharray="3 2"
        />
      </svg>
      <main id="main" className="px-sheet-x-narrow hand:px-sheet-x">
        <h1 className="pb-2 pt-6 font-serif text-title-narrow font-title tracking-[-.008em] hand:text-title">
          {title}
        </h1>
        <div className="flex max-w-[60ch] flex-col items-start gap-3">{children}</div>
      </main>
    </div>
  );
}
