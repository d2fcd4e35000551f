'use client';

import Link from 'next/link';

/** The way to the search, from every page. */
export function HeadSearch() {
  return (
    <Link
      href="/search"
      aria-label="Search"
      className="flex size-8 items-center justify-center rounded-button text-ink-2 hover:bg-leaf hover:text-ink pointer-coarse:size-11"
    >
      <svg viewBox="0 0 16 16" aria-hidden="true" className="size-4">
        <circle cx="6.6" cy="6.6" r="4.4" fill="none" stroke="currentColor" strokeWidth="1.5" />
        <path d="M10 10l4 4" stroke="currentColor" strokeWidth="1.5" strokeLinecap="round" />
      </svg>
    </Link>
  );
}
