'use client';

import { Checkbox, SelectField } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import { Fold } from '@/components/ui/fold';
import { FormulaText } from '@/components/ui/formula-text';
import { Unit } from '@/components/ui/quantity';
import { DRIVE_WORDS, RANGE_FIELDS, selectionWords, shownBound, typedBound } from '@/lib/compare/selection-words'; // prettier-ignore
import { countOf } from '@/lib/format/count';
import { DRIVES } from '@/lib/schemas/selection';
import { SavedSelections } from './saved-selections';
import type { SelectionState } from './use-selection';

interface SelectionBarProps {
  selection: SelectionState;
  campaigns: readonly { id: string; name: string; runs: number }[];
  tags: readonly string[];
  viewer: { id: string; mayEditAll: boolean };
}

const SIGNED = [
  { value: '', label: 'signed off or not' },
  { value: 'yes', label: 'signed off' },
  { value: 'no', label: 'not signed off' },
];

/** What runs are chosen by, in words, with the fields under them, and the selections that were kept. */
export function SelectionBar({ selection, campaigns, tags, viewer }: SelectionBarProps) {
  const { filters, set } = selection;
  const chosen = filters.campaigns?.split(',').filter(Boolean) ?? [];
  const all = chosen.length === 0;
  const toggle = (id: string) => {
    const now = all ? campaigns.map((campaign) => campaign.id) : chosen;
    const next = now.includes(id) ? now.filter((one) => one !== id) : [...now, id];
    set({ campaigns: next.length === campaigns.length ? '' : next.join(',') });
  };
  const options = (first: string, values: readonly string[], words: (value: string) => string) => [
    { value: '', label: first },
    ...values.map((value) => ({ value, label: words(value) })),
  ];
  return (
    <div className="flex flex-wrap items-start justify-between gap-x-4 pb-2 print:hidden">
      <Fold
        className="min-w-0 flex-1"
        title={
          <span className="text-ink">
            Selection: <Words>{selectionWords(filters)}</Words>
          </span>
        }
      >
        <div className="grid gap-x-6 gap-y-3 pb-3 pt-2 hand:grid-cols-[minmax(180px,260px)_minmax(0,1fr)]">
          <fieldset className="min-w-0">
            <legend className="text-small text-ink-2">
              {all
                ? countOf(campaigns.length, 'campaign')
                : `${chosen.length} of ${countOf(campaigns.length, 'campaign')}`}
            </legend>
            <ul className="flex max-h-44 flex-col gap-1 overflow-y-auto pt-1">
              {campaigns.map((campaign) => (
                <li key={campaign.id}>
                  <Checkbox
                    label={`${campaign.name}, ${countOf(campaign.runs, 'run')}`}
                    checked={all || chosen.includes(campaign.id)}
                    // Nothing chosen would mean everything.
                    disabled={chosen.length === 1 && chosen[0] === campaign.id}
                    onChange={() => toggle(campaign.id)}
                  />
                </li>
              ))}
            </ul>
          </fieldset>
          <div className="flex flex-wrap content-start items-end gap-x-4 gap-y-2">
            {RANGE_FIELDS.map((range) => (
              <span key={range.label} className="flex items-end gap-2">
                <Bound selection={selection} range={range} end="from" />
                <Bound selection={selection} range={range} end="to" />
              </span>
            ))}
            <SelectField
              label="Drive"
              className="w-40"
              value={filters.drives ?? ''}
              onChange={({ target }) => set({ drives: target.value })}
              options={options('any drive', DRIVES, (drive) => DRIVE_WORDS[drive])}
            />
            <SelectField
              label="Tag"
              className="w-40"
              value={filters.tags ?? ''}
              onChange={({ target }) => set({ tags: target.value })}
              options={options('any tag', tags, (tag) => tag)}
            />
            <SelectField
              label="Sign-off"
              className="w-44"
              value={filters.signedOff ?? ''}
              onChange={({ target }) => set({ signedOff: target.value })}
              options={SIGNED}
            />
          </div>
        </div>
      </Fold>
      <SavedSelections selection={selection} viewer={viewer} />
    </div>
  );
}

/** Words with their subscripts and powers set in type. */
function Words({ children }: { children: string }) {
  return children.includes('_') ? <FormulaText>{children}</FormulaText> : <Unit>{children}</Unit>;
}

/** One end of a range; it counts when the field is left or Enter is pressed. */
function Bound({
  selection: { filters, set },
  range,
  end,
}: {
  selection: SelectionState;
  range: (typeof RANGE_FIELDS)[number];
  end: 'from' | 'to';
}) {
  const name = range[end];
  const shown = shownBound(filters[name], range.siPerUnit);
  const take = (text: string) => {
    const typed = typedBound(text, range.siPerUnit);
    if (typed !== (filters[name] ?? '')) set({ [name]: typed });
  };
  return (
    <Field
      key={shown}
      label={<Words>{`${range.label} ${end}`}</Words>}
      unit={range.unit}
      inputMode="decimal"
      className="w-[124px]"
      defaultValue={shown}
      onBlur={({ currentTarget }) => take(currentTarget.value)}
      onKeyDown={({ key, currentTarget }) => {
        if (key === 'Enter') take(currentTarget.value);
      }}
    />
  );
}
