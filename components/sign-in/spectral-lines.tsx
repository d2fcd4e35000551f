/** Helium's visible lines that the product's hues come from, nm. */
const LINES = [
  { nm: 447.1, stroke: 'stroke-violet' },
  { nm: 501.6, stroke: 'stroke-green' },
  { nm: 587.6, stroke: 'stroke-amber' },
  { nm: 667.8, stroke: 'stroke-red' },
] as const;

const FROM_NM = 430;
const TO_NM = 690;

/** A thread across the window with helium's four lines standing on it at their wavelengths. */
export function SpectralLines() {
  return (
    <svg width="100%" height="113" aria-hidden="true" className="block overflow-visible">
      <line x1="0" x2="100%" y1="112" y2="112" className="stroke-ink" strokeWidth="1.5" />
      {LINES.map(({ nm, stroke }) => {
        const at = `${((nm - FROM_NM) / (TO_NM - FROM_NM)) * 100}%`;
        return <line key={nm} x1={at} x2={at} y1="0" y2="111" className={stroke} strokeWidth="4" />;
      })}
    </svg>
  );
}
