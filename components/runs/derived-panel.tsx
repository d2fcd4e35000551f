import { QuantityRow, QuantitySymbol } from '@/components/ui/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { DerivedEntry, DerivedRun } from '@/tracking/flow/derived-run';

/** Absolute standard error from the relative one. */
const errorOf = (entry: DerivedEntry) =>
  entry.value !== null && entry.relativeError !== null ? Math.abs(entry.value) * entry.relativeError : null;

/** Interval of a positive quantity that is known to a factor: half width on its logarithm. */
function factorInterval(entry: DerivedEntry) {
  if (entry.value === null || entry.relativeError === null) return {};
  const factor = Math.exp(1.96 * entry.relativeError);
  return { low: entry.value / factor, high: entry.value * factor };
}

interface DerivedPanelProps {
  derived: DerivedRun;
  pixelSizeM: number | null;
  /** False where the margin isn't beside the panel, so that no thread can lead there. */
  tied?: boolean;
}

/** What follows from the conditions, changing with every key. */
export function DerivedPanel({ derived, pixelSizeM, tied = true }: DerivedPanelProps) {
  const { entries, warnings } = derived;
  const reason = entries.rhoSRatio.value === null ? entries.rhoSRatio.reason : null;
  const flowReason = reason === null && entries.vn_m_s.value === null ? entries.vn_m_s.reason : null;
  const tieOf = (...fields: string[]) =>
    tied ? warnings.find(({ field }) => field && fields.includes(field))?.code : undefined;
  const stepPx = entries.stepPerFrame_px;
  const stepM = stepPx.value !== null && pixelSizeM ? stepPx.value * pixelSizeM : null;
  const velocity = DISPLAY_UNITS.velocity;
  return (
    <div aria-live="polite" aria-label="Derived quantities" role="group">
      <h2 className="pb-2 font-serif text-head2 font-strong">
        Derived <span className="pl-2 font-sans text-note font-text text-ink-2">follows every change</span>
      </h2>
      {reason ? <p className="pb-2 text-note text-amber-text">{reason}</p> : null}
      <dl>
        <QuantityRow
          name="Superfluid fraction"
          symbol={
            <QuantitySymbol letter="ρ" sub="s">
              /<i>ρ</i>
            </QuantitySymbol>
          }
          value={entries.rhoSRatio.value}
          uncertainty={errorOf(entries.rhoSRatio)}
          tie={tieOf('temperature_K')}
        />
        <QuantityRow
          name="Mutual friction"
          symbol={<QuantitySymbol letter="α" />}
          value={entries.alpha.value}
          uncertainty={errorOf(entries.alpha)}
        />
        <QuantityRow
          name="Normal fluid, mean"
          symbol={<QuantitySymbol letter="v" sub="n" />}
          value={entries.vn_m_s.value}
          uncertainty={errorOf(entries.vn_m_s)}
          note={flowReason}
          {...velocity}
        />
        <QuantityRow
          name="Superfluid, mean"
          symbol={<QuantitySymbol letter="v" sub="s" />}
          value={entries.vs_m_s.value}
          uncertainty={errorOf(entries.vs_m_s)}
          {...velocity}
        />
        <QuantityRow
          name="Counterflow"
          symbol={<QuantitySymbol letter="v" sub="ns" />}
          value={entries.vns_m_s.value}
          uncertainty={errorOf(entries.vns_m_s)}
          {...velocity}
        />
        <QuantityRow
          name={settlingName(entries.settling_m_s.value)}
          symbol={<QuantitySymbol letter="v" sub="t" />}
          value={entries.settling_m_s.value === null ? null : Math.abs(entries.settling_m_s.value)}
          note={entries.settling_m_s.value === null && reason === null ? entries.settling_m_s.reason : null}
          tie={tieOf('tracer.diameter_m', 'tracer.density_kg_m3')}
          {...velocity}
        />
      </dl>
      <h2 className="pb-2 pt-[18px] font-serif text-head2 font-strong">Expected in the frames</h2>
      <dl>
        <QuantityRow
          name="Step per frame"
          symbol={
            <QuantitySymbol letter="v">
              &thinsp;Δ<i>t</i>
            </QuantitySymbol>
          }
          value={stepPx.value}
          unit="px"
          tie={tieOf('frameInterval_s', 'exposure_s')}
          note={stepPx.value === null && reason === null ? stepPx.reason : stepNote(stepM)}
        />
        <QuantityRow
          name="Line spacing"
          symbol={<QuantitySymbol letter="ℓ" />}
          value={entries.expectedSpacing_m.value}
          {...factorInterval(entries.expectedSpacing_m)}
          tie={tieOf('pixelSize_m', 'sheetThickness_m')}
          note={reason === null ? entries.expectedSpacing_m.reason : null}
          {...DISPLAY_UNITS.smallLength}
        />
      </dl>
    </div>
  );
}

const settlingName = (velocityMS: number | null) =>
  velocityMS === null ? 'Settling' : velocityMS > 0 ? 'Settling, sinks' : 'Settling, rises';

const stepNote = (stepM: number | null) =>
  stepM === null ? null : `${Number((stepM * 1e6).toPrecision(3))} µm in the fluid`;
