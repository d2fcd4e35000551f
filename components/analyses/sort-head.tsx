import type { ReactNode } from 'react';
import { Chevron } from '@/components/ui/choice';
import { Unit } from '@/components/ui/quantity';

interface SortHeadProps {
  field: string;
  /** The table's order: a field, with `-` before it for descending. */
  sort: string;
  onSort: (sort: string) => void;
  unit?: string;
  numeric?: boolean;
  narrow?: 'hide';
  children: ReactNode;
}

/** Head of a column that sorts in place, for tables whose order does not stand in the address. */
export function SortHead({ field, sort, onSort, unit, numeric, narrow, children }: SortHeadProps) {
  const current = sort === field ? 'ascending' : sort === `-${field}` ? 'descending' : null;
  return (
    <th
      scope="col"
      aria-sort={current ?? 'none'}
      className={`border-b border-ink pb-[5px] pr-4 pt-[6px] align-bottom text-small font-strong text-ink-2 first:pl-2 last:pr-0 ${numeric ? 'text-right' : 'text-left'} ${narrow === 'hide' ? 'max-hand:hidden' : ''}`}
    >
      <button
        type="button"
        onClick={() => onSort(current === 'ascending' ? `-${field}` : field)}
        className={`inline-flex min-h-6 items-center gap-1 hover:text-ink ${current ? 'text-ink' : ''}`}
      >
        {children}
        <Chevron
          className={`${current ? '' : 'opacity-40'} ${current === 'ascending' ? 'rotate-180' : ''}`}
        />
      </button>
      {unit ? (
        <span className="block font-text text-ink-3">
          <Unit>{unit}</Unit>
        </span>
      ) : null}
    </th>
  );
}
