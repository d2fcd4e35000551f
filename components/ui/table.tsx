import Link from 'next/link';
import type { ComponentPropsWithoutRef, ReactNode } from 'react';
import { Chevron } from './choice';
import { Unit } from './quantity';
import { ScrollBox } from './scroll-box';

/** Hides a column below 640 px; its values go into `NarrowMore` of the row. */
const narrowClasses = (narrow: 'hide' | undefined) => (narrow === 'hide' ? 'max-hand:hidden' : '');

interface TableProps extends ComponentPropsWithoutRef<'table'> {
  /** What the table holds, for screen readers. */
  label: string;
  /** `note` for dense tables of 24 px rows. */
  density?: 'normal' | 'dense';
}

/** A ruled table; scrolls sideways inside itself rather than pushing the page. */
export function Table({ label, density = 'normal', className = '', children, ...rest }: TableProps) {
  return (
    <ScrollBox label={label}>
      <table
        aria-label={label}
        className={`w-full border-collapse ${density === 'dense' ? 'text-note [&_td]:py-[2px] [&_th]:pr-3 [&_td]:pr-3' : ''} ${className}`}
        {...rest}
      >
        {children}
      </table>
    </ScrollBox>
  );
}

interface HeadCellProps {
  children?: ReactNode;
  numeric?: boolean;
  /** Second line of the head; `^` raises exponents. */
  unit?: string;
  narrow?: 'hide';
  className?: string;
  /** Makes the head a link that sorts; `current` is the direction the table is sorted in by it. */
  sort?: { href: string; current: 'ascending' | 'descending' | null };
  /** For a head of a column of actions: read, not shown. */
  silent?: boolean;
}

/** Head of a column: name, and its unit in a second line. */
export function HeadCell({ children, numeric, unit, narrow, sort, silent, className = '' }: HeadCellProps) {
  const name = silent ? <span className="sr-only">{children}</span> : children;
  return (
    <th
      scope="col"
      aria-sort={sort ? (sort.current ?? 'none') : undefined}
      className={`border-b border-ink pb-[5px] pr-4 pt-[6px] align-bottom text-small font-strong text-ink-2 last:pr-0 ${numeric ? 'text-right' : 'text-left'} ${narrowClasses(narrow)} ${className}`}
    >
      {sort ? (
        <Link
          href={sort.href}
          scroll={false}
          className={`inline-flex items-center gap-1 no-underline hover:text-ink ${sort.current ? 'text-ink' : ''}`}
        >
          {name}
          <Chevron
            className={`${sort.current ? '' : 'opacity-40'} ${sort.current === 'ascending' ? 'rotate-180' : ''}`}
          />
        </Link>
      ) : (
        name
      )}
      {unit ? (
        <span className="block font-text text-ink-3">
          <Unit>{unit}</Unit>
        </span>
      ) : null}
    </th>
  );
}

interface RowProps extends ComponentPropsWithoutRef<'tr'> {
  selected?: boolean;
  /** A row of totals: ruled above and below. */
  total?: boolean;
}

export function Row({ selected, total, className = '', ...rest }: RowProps) {
  const look = selected
    ? 'bg-violet-wash [&>:first-child]:shadow-[inset_2px_0_0_var(--violet)]'
    : total
      ? 'font-strong [&>*]:border-b [&>*]:border-t [&>*]:border-ink'
      : 'hover:bg-leaf';
  return <tr aria-current={selected || undefined} className={`${look} ${className}`} {...rest} />;
}

interface CellProps extends ComponentPropsWithoutRef<'td'> {
  numeric?: boolean;
  quiet?: boolean;
  narrow?: 'hide';
  /** The cell names the row; rendered as a row header. */
  head?: boolean;
}

/** A cell: words left, numbers right. */
export function Cell({ numeric, quiet, narrow, head, className = '', ...rest }: CellProps) {
  const classes = `border-b border-line py-[5px] pr-4 align-middle leading-5 last:pr-0 ${numeric ? 'text-right tabular-nums' : 'text-left'} ${quiet ? 'text-ink-2' : ''} ${narrowClasses(narrow)} ${className}`;
  return head ? (
    <th scope="row" className={`${classes} font-text`} {...rest} />
  ) : (
    <td className={classes} {...rest} />
  );
}

/** The quiet second line under a name in a cell. */
export function CellNote({ children, tone = 'quiet' }: { children: ReactNode; tone?: 'quiet' | 'error' }) {
  return <div className={`text-small ${tone === 'error' ? 'text-red-text' : 'text-ink-3'}`}>{children}</div>;
}

interface NarrowItems {
  items: readonly { label: ReactNode; value: ReactNode }[];
}

/** What the hidden columns of a row say, folded under its name on narrow screens only. */
export function NarrowMore({ items }: NarrowItems) {
  return (
    <details className="text-small text-ink-2 hand:hidden">
      <summary className="min-h-6 py-1 text-ink-3">more</summary>
      <NarrowList items={items} />
    </details>
  );
}

/** The same in plain sight, where the hidden columns are what the table is for. */
export const NarrowShown = ({ items }: NarrowItems) => (
  <div className="pt-1 text-small text-ink-2 hand:hidden">
    <NarrowList items={items} />
  </div>
);

const NarrowList = ({ items }: NarrowItems) => (
  <dl className="grid grid-cols-[auto_minmax(0,1fr)] gap-x-3 gap-y-[2px] pb-1">
    {items.map((item, index) => (
      <div key={index} className="contents">
        <dt>{item.label}</dt>
        <dd className="text-ink">{item.value}</dd>
      </div>
    ))}
  </dl>
);
