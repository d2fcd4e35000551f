'use client';

import Link from 'next/link';
import { useEffect, useRef, type ReactNode } from 'react';

export interface PathLevel {
  /** The level's kind: Lab, Campaign, Run, Recording, Analysis. */
  kind: string;
  name: ReactNode;
  href: string;
}

const LEVEL = "relative shrink-0 pb-[13px] after:absolute after:left-0 after:rounded-bead after:content-['']";
const PASSED =
  'border-b-[1.5px] border-ink pr-[22px] hand:pr-11 after:-bottom-[5.25px] after:size-bead after:bg-ink';
const HERE =
  "border-b-[1.5px] border-transparent pr-[30px] max-hand:flex-1 before:absolute before:inset-x-0 before:-bottom-[1.5px] before:h-[1.5px] before:bg-linear-to-r before:from-ink before:to-line before:content-[''] after:-bottom-[7.25px] after:size-bead-here after:border-[3px] after:border-ink after:bg-paper";

/**
 * Where am I: one bead per level from the laboratory to here, the last one being this page; the
 * page's actions stand on the rest of the thread. Narrow: scrolls, opens at the current bead, and
 * the actions go under it.
 */
export function PathThread({ levels, actions }: { levels: readonly PathLevel[]; actions?: ReactNode }) {
  const strip = useRef<HTMLOListElement>(null);
  const here = levels.at(-1)?.href;
  useEffect(() => {
    if (strip.current) strip.current.scrollLeft = strip.current.scrollWidth;
  }, [here]);
  return (
    <nav aria-label="Where you are" className="relative hand:flex hand:items-end">
      <div
        aria-hidden="true"
        className="absolute inset-x-0 bottom-2 h-px bg-line max-hand:hidden print:hidden"
      />
      <ol
        ref={strip}
        className="relative flex min-w-0 flex-1 overflow-x-auto overflow-y-hidden pb-2 pl-sheet-x-narrow [scrollbar-width:none] before:absolute before:bottom-2 before:left-0 before:h-[1.5px] before:w-sheet-x-narrow before:bg-ink before:content-[''] hand:pl-sheet-x hand:before:w-sheet-x print:pl-0 print:before:hidden"
      >
        {levels.map((level, index) => {
          const current = index === levels.length - 1;
          return (
            <li key={level.href} className={`${LEVEL} ${current ? HERE : PASSED}`}>
              <Link
                href={level.href}
                aria-current={current ? 'page' : undefined}
                className="group block no-underline outline-offset-[-2px]"
              >
                <span className="block text-tick text-ink-3">{level.kind}</span>
                <span
                  className={`block whitespace-nowrap leading-[18px] group-hover:text-violet-text ${current ? 'font-strong' : ''}`}
                >
                  {level.name}
                </span>
              </Link>
            </li>
          );
        })}
      </ol>
      {actions ? (
        <div className="flex flex-wrap gap-2 px-sheet-x-narrow pt-1 hand:shrink-0 hand:flex-nowrap hand:pb-[17px] hand:pl-0 hand:pr-sheet-x hand:pt-0 print:hidden">
          {actions}
        </div>
      ) : null}
    </nav>
  );
}
