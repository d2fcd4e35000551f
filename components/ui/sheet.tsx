import Link from 'next/link';
import type { ReactNode } from 'react';
import { Ties } from './ties';

interface SheetProps {
  children: ReactNode;
  /** Notes of the margin column; without them the main column has the whole width. */
  margin?: ReactNode;
  marginLabel?: string;
}

/** The page's main landmark: one main column and one margin, which goes under it below 1100 px. */
export function Sheet({ children, margin, marginLabel = 'Margin notes' }: SheetProps) {
  const columns = margin ? 'aside:grid-cols-[minmax(0,1fr)_280px]' : '';
  return (
    <main
      id="main"
      tabIndex={-1}
      className={`relative grid grid-cols-[minmax(0,1fr)] gap-x-gutter px-sheet-x-narrow pb-8 pt-4 outline-none hand:px-sheet-x hand:pt-[22px] print:block print:p-0 ${columns}`}
    >
      <div className="min-w-0">{children}</div>
      {margin ? (
        <aside
          aria-label={marginLabel}
          className="mt-[22px] border-t border-line pt-[18px] desk:columns-2 desk:gap-gutter aside:mt-0 aside:columns-1 aside:border-l aside:border-t-0 aside:pl-6 aside:pt-0"
        >
          {margin}
        </aside>
      ) : null}
      {margin ? <Ties /> : null}
    </main>
  );
}

/** The page's title with its state and what stands at the right. */
export function PageTitle({
  children,
  state,
  aside,
}: {
  children: ReactNode;
  state?: ReactNode;
  aside?: ReactNode;
}) {
  return (
    <div className="flex flex-wrap items-baseline gap-x-4 gap-y-1 pb-[14px]">
      <h1 className="font-serif text-title-narrow font-title tracking-[-.008em] hand:text-title">
        {children}
      </h1>
      {state}
      {aside ? <div className="text-ink-2 hand:ml-auto">{aside}</div> : null}
    </div>
  );
}

/** The opening sentence of a page, its links being what can be opened. */
export function Lede({ children }: { children: ReactNode }) {
  return (
    <p className="max-w-[84ch] font-serif text-lede-narrow text-pretty hand:text-lede [&_a]:underline-offset-4">
      {children}
    </p>
  );
}

interface SectionProps {
  id?: string;
  title: ReactNode;
  /** Follows the title, quiet: "2 at work, 1 waiting". */
  count?: ReactNode;
  /** A link at the right end. */
  more?: { href: string; label: string };
  /** Controls at the right end. */
  tools?: ReactNode;
  children: ReactNode;
  /** Without the space above: for a section that starts a column. */
  flush?: boolean;
}

/** A part of the page under its own heading. */
export function Section({ id, title, count, more, tools, children, flush = false }: SectionProps) {
  return (
    <section id={id} className={flush ? '' : 'pt-[22px] first:pt-0'}>
      <div className="flex flex-wrap items-baseline gap-x-[10px] gap-y-1 pb-1">
        <h2 className="font-serif text-head2 font-strong">{title}</h2>
        {count ? (
          <span className="text-note text-ink-2 max-hand:order-3 max-hand:basis-full">{count}</span>
        ) : null}
        {more ? (
          <Link href={more.href} className="ml-auto whitespace-nowrap text-note">
            {more.label}
          </Link>
        ) : null}
        {tools ? <div className="ml-auto flex flex-wrap items-center gap-2">{tools}</div> : null}
      </div>
      {children}
    </section>
  );
}

/** Names and what they stand for, in two columns: where a number comes from, what a stack is. */
export function Facts({ items }: { items: readonly { name: ReactNode; value: ReactNode }[] }) {
  return (
    <dl className="grid grid-cols-[92px_minmax(0,1fr)] gap-x-3 gap-y-[3px] pt-2 text-note">
      {items.map((item, index) => (
        <div key={index} className="contents">
          <dt className="text-ink-2">{item.name}</dt>
          <dd className="min-w-0 break-words">{item.value}</dd>
        </div>
      ))}
    </dl>
  );
}
