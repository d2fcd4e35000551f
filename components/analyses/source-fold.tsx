'use client';

import type { ReactNode } from 'react';
import { Fold } from '@/components/ui/fold';
import { FormulaText } from '@/components/ui/formula-text';
import { Facts } from '@/components/ui/sheet';
import { useAnalysisSource } from './analysis-source';

interface SourceFoldProps {
  /** How the numbers are made, with the published source; `v_n` is set with a subscript. */
  method: string;
  /** What they were made from. */
  inputs: readonly { name: ReactNode; value: ReactNode }[];
  title?: string;
  className?: string;
}

/** Where numbers of a section come from: method and source, inputs, recipe, stack and code. */
export function SourceFold({
  method,
  inputs,
  title = 'Where this comes from',
  className = 'pt-1',
}: SourceFoldProps) {
  const source = useAnalysisSource();
  return (
    <Fold title={title} className={className}>
      <Facts
        items={[
          { name: 'Method', value: <FormulaText>{method}</FormulaText> },
          ...inputs,
          ...(source
            ? [
                { name: 'Recipe', value: `${source.recipe}, seed ${source.seed}, ${source.draws} draws` },
                {
                  name: 'Stack',
                  value: source.sha256
                    ? `${source.recording}, SHA-256 ${source.sha256.slice(0, 16)}…`
                    : source.recording,
                },
                { name: 'Code', value: source.codeVersion },
              ]
            : []),
        ]}
      />
    </Fold>
  );
}
