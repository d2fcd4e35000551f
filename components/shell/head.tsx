'use client';

import Link from 'next/link';
import { usePathname } from 'next/navigation';
import type { ReactNode } from 'react';
import { Wordmark } from '@/components/ui/wordmark';
import { HeadSearch } from './head-search';
import { currentPlace, type Place } from './places';
import { useOnline } from './use-online';
import { UserMenu, type Viewer } from './user-menu';

export interface HeadProps {
  places: readonly Place[];
  viewer: Viewer;
  switchLab?: (labId: string) => Promise<void>;
  /** What the machine is doing, quiet, left of the name: "2 of 6 workers busy". */
  work?: ReactNode;
}

/** The head of every page of a laboratory, 52 px: wordmark, places, work in hand, the person. */
export function Head({ places, viewer, switchLab, work }: HeadProps) {
  const pathname = usePathname();
  const current = currentPlace(places, pathname);
  const online = useOnline();
  return (
    <header>
      <a
        href="#main"
        className="absolute left-2 top-2 z-notice -translate-y-16 rounded-button bg-ink px-4 py-2 text-paper no-underline focus:translate-y-0 hover:text-paper"
      >
        Skip to the page
      </a>
      <div className="flex h-12 items-stretch gap-3 px-sheet-x-narrow hand:h-head hand:gap-[34px] hand:px-sheet-x print:px-0">
        <Link href="/" className="flex items-center no-underline hover:text-ink">
          <Wordmark />
        </Link>
        <nav aria-label="Places" className="flex flex-1 gap-6 max-hand:hidden print:hidden">
          {places.map((place) => (
            <Link
              key={place.href}
              href={place.href}
              aria-current={place === current ? 'page' : undefined}
              className={`flex items-center no-underline outline-offset-[-2px] hover:text-ink ${place === current ? 'font-strong text-ink' : 'text-ink-2'}`}
            >
              {place.label}
              {place.count ? (
                <span className="ml-[5px] text-tick font-strong tabular-nums text-ink-2">{place.count}</span>
              ) : null}
            </Link>
          ))}
        </nav>
        <div className="ml-auto flex items-center gap-[14px] text-note text-ink-2 print:hidden">
          {work ? <span className="max-desk:hidden">{work}</span> : null}
          <HeadSearch />
          <span className="-mr-2 text-ink max-hand:hidden">
            <UserMenu viewer={viewer} switchLab={switchLab} button={viewer.name} />
          </span>
          <span className="-mr-2 text-ink hand:hidden">
            <UserMenu viewer={viewer} switchLab={switchLab} button="Menu" places={places} current={current} />
          </span>
        </div>
      </div>
      <div role="status" className="print:hidden">
        {online ? null : (
          <p className="border-t-[1.5px] border-dashed border-ink px-sheet-x-narrow py-1 text-note hand:px-sheet-x">
            No link to the server. What you see stays; {whatIsKept(pathname)}.
          </p>
        )}
      </div>
    </header>
  );
}

/** Corrections and verdicts wait in the browser; what is changed elsewhere is not. */
const whatIsKept = (pathname: string): string =>
  /\/(edit|review)(\/|$)/.test(pathname)
    ? 'what you do here is kept and sent later'
    : 'what you change now can’t be stored';
