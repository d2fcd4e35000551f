import { MarginNote } from '@/components/ui/margin-note';
import type { DerivedRun } from '@/tracking/flow/derived-run';

/** Heads of the planning warnings, a few words each; the sentence stands under it. */
const HEADS: Record<string, string> = {
  STEP_LARGER_THAN_SPACING: 'This plan cannot link tracers',
  EXPOSURE_LONGER_THAN_INTERVAL: 'Exposure too long',
  EXPOSURE_BLUR: 'Spots will be streaks',
  SPACING_BELOW_RESOLUTION: 'Lines too close to resolve',
  SHEET_THICKER_THAN_SPACING: 'Sheet thicker than the spacing',
  GAMMA_UNVERIFIED: 'Unverified constant',
  SETTLING_MATTERS: 'Settling matters',
  STOKES_LAW_INVALID: 'Stokes’ law does not hold',
  FLOW_DIRECTION_MISSING: 'Flow direction missing',
};

/** Warnings tied to the rows that they concern, then the safety cautions. */
export function RunNotes({ derived }: { derived: DerivedRun }) {
  return (
    <>
      {derived.warnings.map(({ code, detail }) => (
        <MarginNote key={code} tone="warning" title={HEADS[code] ?? 'Look again'} tie={code}>
          {detail}
        </MarginNote>
      ))}
      {derived.cautions.map(({ code, title, detail }) => (
        <MarginNote key={code} tone="caution" title={title}>
          {detail}
        </MarginNote>
      ))}
      <p className="text-small text-ink-3">
        General information. Local rules and qualified staff decide; Beadline gives no limits and no
        permission.
      </p>
    </>
  );
}
