'use client';

import { Checkbox, SelectField } from '@/components/ui/choice';
import { Fold } from '@/components/ui/fold';
import { methodName } from '@/lib/charts/estimate-rows';
import { CONDITIONS, QUANTITIES } from '@/lib/compare/quantities';
import { COMPARED_METHODS } from '@/lib/schemas/compare';
import { RUN_COLUMNS, usualColumns } from './run-columns';
import type { Comparison } from './use-comparison';

const named = (all: Record<string, { label: string }>) =>
  Object.entries(all).map(([value, { label }]) => ({ value, label }));

/** What is plotted against what, and the method that gives the line density. */
export function CompareChoice({ comparison }: { comparison: Comparison }) {
  const { method, against, quantity, set } = comparison;
  const usually = (value: string, usual: string) => (value === usual ? '' : value);
  return (
    <div className="flex flex-wrap items-end gap-x-4 gap-y-2 pb-3 print:hidden">
      <SelectField
        label="Plot"
        className="w-56"
        value={quantity}
        onChange={({ target }) => set({ quantity: usually(target.value, 'root-density') })}
        options={named(QUANTITIES)}
      />
      <SelectField
        label="Against"
        className="w-48"
        value={against}
        onChange={({ target }) => set({ against: usually(target.value, 'vns') })}
        options={named(CONDITIONS)}
      />
      <SelectField
        label="Line density by"
        className="w-56"
        value={method}
        onChange={({ target }) => set({ method: usually(target.value, 'combined') })}
        options={COMPARED_METHODS.map((value) => ({ value, label: methodName(value) }))}
      />
    </div>
  );
}

/** Which columns the table has. */
export function ColumnChoice({ columns, set }: Pick<Comparison, 'columns' | 'set'>) {
  const toggle = (key: string) => {
    const next = RUN_COLUMNS.map((column) => column.key).filter((one) =>
      one === key ? !columns.includes(one) : columns.includes(one),
    );
    set({ columns: next.length === 0 || next.join() === usualColumns().join() ? '' : next.join(',') });
  };
  return (
    <Fold title={`${columns.length} of ${RUN_COLUMNS.length} columns`} className="print:hidden">
      <ul className="grid grid-cols-2 gap-x-6 gap-y-1 py-2 hand:grid-cols-4">
        {RUN_COLUMNS.map(({ key, label }) => (
          <li key={key}>
            <Checkbox label={label} checked={columns.includes(key)} onChange={() => toggle(key)} />
          </li>
        ))}
      </ul>
    </Fold>
  );
}
