'use client';

import { Checkbox, Segment, SelectField } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import { Fold } from '@/components/ui/fold';
import { methodName } from '@/lib/charts/estimate-rows';
import { countOf } from '@/lib/format/count';
import { COMPARED_METHODS } from '@/lib/schemas/compare';
import type { CompareView } from '@/lib/views/compare-view';
import type { useComparison } from './use-comparison';

const AGAINST_OPTIONS = [
  { value: 'vns', label: 'velocity' },
  { value: 'temperature', label: 'temperature' },
  { value: 'heat-flux', label: 'heat flux' },
] as const;

/** Which campaigns, between which temperatures, by which method, against what. */
export function CompareChoice({
  comparison,
  campaigns,
}: {
  comparison: ReturnType<typeof useComparison>;
  campaigns: CompareView['campaigns'];
}) {
  const { chosen, filters, against, set } = comparison;
  const all = chosen.length === 0;
  const toggle = (id: string) => {
    const now = all ? campaigns.map((campaign) => campaign.id) : chosen;
    const next = now.includes(id) ? now.filter((one) => one !== id) : [...now, id];
    set('campaigns', next.length === campaigns.length ? '' : next.join(','));
  };
  return (
    <div className="flex flex-wrap items-end gap-x-4 gap-y-2 pb-3">
      <Fold
        className="self-center"
        title={`${countOf(all ? campaigns.length : chosen.length, 'campaign')} of ${campaigns.length}`}
      >
        <ul className="flex flex-col gap-1 py-2">
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
      </Fold>
      {(['temperatureFrom_K', 'temperatureTo_K'] as const).map((name) => (
        <Field
          key={`${name} ${filters[name] ?? ''}`}
          label={name === 'temperatureFrom_K' ? 'from' : 'to'}
          unit="K"
          inputMode="decimal"
          className="w-24"
          defaultValue={filters[name] ?? ''}
          onBlur={(event) => apply(name, event.currentTarget.value)}
          onKeyDown={(event) => {
            if (event.key === 'Enter') apply(name, event.currentTarget.value);
          }}
        />
      ))}
      <SelectField
        label="Line density by"
        className="w-56"
        value={filters.method ?? 'combined'}
        onChange={(event) => set('method', event.target.value === 'combined' ? '' : event.target.value)}
        options={COMPARED_METHODS.map((method) => ({ value: method, label: methodName(method) }))}
      />
      <Segment
        label="Against"
        showLabel
        options={AGAINST_OPTIONS}
        value={against}
        onChange={(value) => set('against', value === 'vns' ? '' : value)}
      />
    </div>
  );

  function apply(name: 'temperatureFrom_K' | 'temperatureTo_K', text: string) {
    const tidy = text.trim().replace(',', '.');
    if (tidy !== (filters[name] ?? '')) set(name, tidy);
  }
}
