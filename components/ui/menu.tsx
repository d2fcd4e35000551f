'use client';

import Link from 'next/link';
import { useEffect, useId, useRef, useState, type KeyboardEvent, type ReactNode } from 'react';
import { Chevron } from './choice';

export type MenuItem =
  | { kind: 'link'; label: string; href: string; note?: string; current?: boolean }
  | { kind: 'act'; label: string; onSelect: () => void; note?: string; current?: boolean }
  | { kind: 'heading'; label: string };

interface MenuProps {
  /** What the button shows. */
  button: ReactNode;
  /** Name of the menu for screen readers, and of the button where it has no words. */
  label: string;
  items: readonly MenuItem[];
  align?: 'left' | 'right';
  className?: string;
}

/** The item a key leads to among `count`; `index` -1 when none has focus. Null for other keys. */
export function itemAfterKey(key: string, index: number, count: number): number | null {
  if (count === 0) return null;
  if (key === 'ArrowDown') return index < 0 ? 0 : (index + 1) % count;
  if (key === 'ArrowUp') return index < 0 ? count - 1 : (index + count - 1) % count;
  if (key === 'Home') return 0;
  if (key === 'End') return count - 1;
  return null;
}

const ITEM =
  'flex min-h-8 w-full items-center gap-4 px-3 text-left no-underline outline-offset-[-2px] hover:bg-sunk hover:text-ink focus-visible:bg-sunk pointer-coarse:min-h-11';

/** A button that opens a list of links and acts; arrows move, Escape closes and gives the focus back. */
export function Menu({ button, label, items, align = 'left', className = '' }: MenuProps) {
  const id = useId();
  const [open, setOpen] = useState(false);
  const root = useRef<HTMLDivElement>(null);
  const opener = useRef<HTMLButtonElement>(null);
  const entries = () => [...(root.current?.querySelectorAll<HTMLElement>('[role^=menuitem]') ?? [])];

  useEffect(() => {
    if (!open) return;
    const closeOutside = (event: Event) => {
      if (!root.current?.contains(event.target as Node)) setOpen(false);
    };
    document.addEventListener('pointerdown', closeOutside);
    document.addEventListener('focusin', closeOutside);
    return () => {
      document.removeEventListener('pointerdown', closeOutside);
      document.removeEventListener('focusin', closeOutside);
    };
  }, [open]);

  useEffect(() => {
    if (open) root.current?.querySelector<HTMLElement>('[role^=menuitem]')?.focus();
  }, [open]);

  const onKeyDown = (event: KeyboardEvent) => {
    if (!open) {
      if (event.key === 'ArrowDown') {
        event.preventDefault();
        setOpen(true);
      }
      return;
    }
    if (event.key === 'Escape') {
      setOpen(false);
      opener.current?.focus();
      return;
    }
    const list = entries();
    const next = itemAfterKey(event.key, list.indexOf(document.activeElement as HTMLElement), list.length);
    if (next === null) return;
    event.preventDefault();
    list[next].focus();
  };

  const choose = (act?: () => void) => {
    setOpen(false);
    opener.current?.focus();
    act?.();
  };

  return (
    <div ref={root} className={`relative ${className}`} onKeyDown={onKeyDown}>
      <button
        ref={opener}
        type="button"
        aria-haspopup="menu"
        aria-expanded={open}
        aria-controls={open ? id : undefined}
        aria-label={typeof button === 'string' ? undefined : label}
        onClick={() => setOpen(!open)}
        className="inline-flex h-10 items-center gap-[6px] rounded-button px-2 hover:bg-leaf hand:h-control pointer-coarse:h-control-touch"
      >
        {button}
        <Chevron className={open ? 'rotate-180' : ''} />
      </button>
      {open ? (
        <div
          id={id}
          role="menu"
          aria-label={label}
          className={`absolute top-full z-menu mt-1 max-h-[70vh] min-w-56 overflow-y-auto rounded-button border border-line bg-leaf py-1 shadow-lifted ${align === 'right' ? 'right-0' : 'left-0'}`}
        >
          {items.map((item, index) => (
            <Entry key={index} item={item} choose={choose} />
          ))}
        </div>
      ) : null}
    </div>
  );
}

function Entry({ item, choose }: { item: MenuItem; choose: (act?: () => void) => void }) {
  if (item.kind === 'heading') {
    return (
      <div role="presentation" className="px-3 pb-[2px] pt-2 text-tick text-ink-3">
        {item.label}
      </div>
    );
  }
  const content = (
    <>
      <span className={item.current ? 'font-strong' : ''}>{item.label}</span>
      {item.note ? <span className="ml-auto text-small text-ink-3">{item.note}</span> : null}
      {item.current ? (
        <span aria-hidden="true" className="ml-auto size-bead-small rounded-bead bg-ink" />
      ) : null}
    </>
  );
  if (item.kind === 'link') {
    return (
      <Link
        role="menuitem"
        tabIndex={-1}
        href={item.href}
        aria-current={item.current ? 'page' : undefined}
        onClick={() => choose()}
        className={ITEM}
      >
        {content}
      </Link>
    );
  }
  const checkable = item.current === undefined ? {} : { 'aria-checked': item.current };
  return (
    <button
      type="button"
      role={item.current === undefined ? 'menuitem' : 'menuitemradio'}
      tabIndex={-1}
      onClick={() => choose(item.onSelect)}
      className={ITEM}
      {...checkable}
    >
      {content}
    </button>
  );
}
