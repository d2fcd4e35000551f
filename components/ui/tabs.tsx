'use client';

import Link from 'next/link';
import { useEffect, useId, useRef, useState, type KeyboardEvent, type ReactNode } from 'react';

const tabClasses = (current: boolean) =>
  `relative shrink-0 whitespace-nowrap pt-[6px] pb-2 no-underline transition-colors duration-quick hover:text-ink ${
    current
      ? "font-strong text-ink after:absolute after:-bottom-[5px] after:left-1/2 after:size-bead after:-translate-x-1/2 after:rounded-bead after:bg-ink after:content-['']"
      : 'text-ink-2'
  }`;

export interface TabLink {
  href: string;
  label: string;
  current: boolean;
  count?: number;
}

/** Places inside a page that have addresses of their own: a thread whose bead marks the current one. */
export function TabLinks({ label, tabs }: { label: string; tabs: readonly TabLink[] }) {
  const nav = useRef<HTMLElement>(null);
  const current = tabs.find((tab) => tab.current)?.href;
  // On a phone the strip is longer than the window: the current place must not be hidden beyond its edge.
  useEffect(() => {
    const link = nav.current?.querySelector<HTMLElement>('[aria-current]');
    const strip = link?.parentElement;
    if (link && strip) strip.scrollLeft = link.offsetLeft - (strip.clientWidth - link.offsetWidth) / 2;
  }, [current]);
  return (
    <nav ref={nav} aria-label={label} className="print:hidden">
      <Strip>
        {tabs.map((tab) => (
          <Link
            key={tab.href}
            href={tab.href}
            aria-current={tab.current ? 'page' : undefined}
            className={tabClasses(tab.current)}
          >
            {tab.label}
            {tab.count === undefined ? null : (
              <span className="ml-[5px] text-tick text-ink-2">{tab.count}</span>
            )}
          </Link>
        ))}
      </Strip>
    </nav>
  );
}

// The bead hangs half below the line, so the strip that scrolls reaches 6 px under it.
function Strip({ children, ...rest }: { children: ReactNode; role?: string; 'aria-label'?: string }) {
  return (
    <div className="relative">
      <div aria-hidden="true" className="absolute inset-x-0 bottom-[6px] h-px bg-line" />
      <div
        className="relative flex gap-[26px] overflow-x-auto overflow-y-hidden pb-[6px] [scrollbar-width:none]"
        {...rest}
      >
        {children}
      </div>
    </div>
  );
}

/** The tab that a key moves to; null for keys that don't move. Ends wrap around. */
export function tabAfterKey(key: string, index: number, count: number): number | null {
  if (key === 'ArrowRight') return (index + 1) % count;
  if (key === 'ArrowLeft') return (index + count - 1) % count;
  if (key === 'Home') return 0;
  if (key === 'End') return count - 1;
  return null;
}

/** Panels of one page, switched without a new address; arrow keys, Home and End move. */
export function Tabs({
  label,
  tabs,
}: {
  label: string;
  tabs: readonly { key: string; label: string; panel: ReactNode }[];
}) {
  const id = useId();
  const [chosen, setChosen] = useState(tabs[0]?.key);
  const strip = useRef<HTMLDivElement>(null);
  const onKeyDown = (event: KeyboardEvent) => {
    const index = tabs.findIndex((tab) => tab.key === chosen);
    const next = tabAfterKey(event.key, index, tabs.length);
    if (next === null) return;
    event.preventDefault();
    setChosen(tabs[next].key);
    strip.current?.querySelectorAll<HTMLElement>('[role=tab]')[next]?.focus();
  };
  return (
    <div>
      <div ref={strip} onKeyDown={onKeyDown}>
        <Strip role="tablist" aria-label={label}>
          {tabs.map((tab) => (
            <button
              key={tab.key}
              type="button"
              role="tab"
              id={`${id}-tab-${tab.key}`}
              aria-selected={tab.key === chosen}
              aria-controls={`${id}-panel-${tab.key}`}
              tabIndex={tab.key === chosen ? 0 : -1}
              onClick={() => setChosen(tab.key)}
              className={tabClasses(tab.key === chosen)}
            >
              {tab.label}
            </button>
          ))}
        </Strip>
      </div>
      {tabs.map((tab) => (
        <div
          key={tab.key}
          role="tabpanel"
          id={`${id}-panel-${tab.key}`}
          aria-labelledby={`${id}-tab-${tab.key}`}
          hidden={tab.key !== chosen}
          tabIndex={0}
          className="pt-4"
        >
          {tab.panel}
        </div>
      ))}
    </div>
  );
}
