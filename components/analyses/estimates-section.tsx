'use client';

import { useState } from 'react';
import { EstimateTable } from '@/components/charts/estimate-table';
import { Segment } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';
import type { MeasuresView } from '@/lib/views/analysis-view';
import { agreementSentence, DENSITY_UNIT, estimateRows, SPACING_UNIT } from '@/lib/charts/estimate-rows';
import { EstimateSources } from './estimate-sources';

const QUANTITIES = [
  { value: 'line_density', label: 'density' },
  { value: 'line_spacing', label: 'spacing' },
] as const;

/** Line density or line spacing by every method, side by side. */
export function EstimatesSection({ estimates }: { estimates: MeasuresView['estimates'] }) {
  const [quantity, setQuantity] = useState<'line_density' | 'line_spacing'>('line_density');
  const density = quantity === 'line_density';
  const unit = density ? DENSITY_UNIT : SPACING_UNIT;
  const rows = estimateRows(estimates, quantity, unit);
  return (
    <Section
      title={density ? 'Line density, side by side' : 'Line spacing, side by side'}
      count="thick: statistical, thin: with systematic, 95 %"
      tools={<Segment label="Quantity" options={QUANTITIES} value={quantity} onChange={setQuantity} />}
    >
      {rows.length === 0 ? (
        <EmptyState>No estimate was made.</EmptyState>
      ) : (
        <>
          <EstimateTable
            label={density ? 'Line density by each method' : 'Line spacing by each method'}
            symbol={<i>{density ? 'L' : 'ℓ'}</i>}
            displayUnit={unit}
            rows={rows}
          />
          <p className="pt-2 text-note text-ink-2">{agreementSentence(rows)}</p>
          <EstimateSources estimates={estimates.filter((one) => one.quantity === quantity)} />
        </>
      )}
    </Section>
  );
}
