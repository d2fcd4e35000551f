import { Chevron } from '@/components/ui/choice';
import { StateBead } from '@/components/ui/state-bead';
import { quantityText } from '@/lib/format/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { DerivedRun } from '@/tracking/flow/derived-run';
import { DerivedPanel } from './derived-panel';

/** What matters most of the derived quantities, in one line. */
function shortWords({ entries }: DerivedRun): string {
  const { vns_m_s: vns, stepPerFrame_px: step, rhoSRatio } = entries;
  const parts = [
    vns.value === null
      ? null
      : `counterflow ${quantityText({ value: vns.value, ...DISPLAY_UNITS.velocity })}`,
    step.value === null ? null : `step ${quantityText({ value: step.value, unit: 'px' })}`,
  ].filter((part) => part !== null);
  return parts.length > 0 ? parts.join(', ') : (rhoSRatio.reason ?? vns.reason ?? 'nothing follows yet');
}

/** On narrow screens: the derived quantities as one line at the foot, which opens to all of them. */
export function DerivedFold({ derived, pixelSizeM }: { derived: DerivedRun; pixelSizeM: number | null }) {
  const warnings = derived.warnings.length;
  return (
    <details className="group sticky bottom-0 z-head -mx-sheet-x-narrow border-t border-ink bg-paper px-sheet-x-narrow hand:-mx-sheet-x hand:px-sheet-x desk:hidden print:static">
      <summary className="flex min-h-11 cursor-pointer list-none items-center gap-2 text-note">
        <span className="min-w-0 flex-1 truncate">
          <span className="font-strong">Derived:</span> {shortWords(derived)}
        </span>
        {warnings > 0 ? (
          <span className="inline-flex items-center gap-1 text-amber-text">
            <StateBead state="warning" />
            {warnings}
            <span className="sr-only">warnings</span>
          </span>
        ) : null}
        <Chevron className="group-open:rotate-180" />
      </summary>
      <div className="max-h-[60vh] overflow-y-auto pb-4">
        <DerivedPanel derived={derived} pixelSizeM={pixelSizeM} tied={false} />
      </div>
    </details>
  );
}
