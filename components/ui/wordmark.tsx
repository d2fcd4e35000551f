/** The name as a drawing: rings on a thread. Least height 24 px; the ink follows the text colour. */
export function Wordmark({ heightPx = 30 }: { heightPx?: number }) {
  return (
    <svg
      viewBox="0 0 232 56"
      height={heightPx}
      width={(heightPx * 232) / 56}
      role="img"
      aria-label="Beadline"
      className="block"
    >
      <g fill="none" stroke="currentColor" strokeWidth="3.5" strokeLinecap="round" strokeLinejoin="round">
        <path strokeWidth="1.5" d="M2 34H19M216 34H224" />
        <path strokeWidth="1.2" strokeOpacity=".45" d="M20 34H216" />
        <path d="M20 6V45" />
        <circle cx="31" cy="34" r="11" />
        <path d="M50.5 34H72.5A11 11 0 1 0 68.9 42.1" />
        <circle cx="91.5" cy="34" r="11" />
        <path d="M102.5 23.5V45" />
        <circle cx="121.5" cy="34" r="11" />
        <path d="M132.5 6V45M143.5 6V45M154.5 24V45M165.5 24V45M165.5 33.5A9.25 9.75 0 0 1 184 33.5V45" />
        <path d="M193.5 34H215.5A11 11 0 1 0 211.9 42.1" />
      </g>
      <circle cx="154.5" cy="13.5" r="3.5" className="fill-trapped" />
      <circle cx="226" cy="34" r="3.5" fill="currentColor" />
    </svg>
  );
}
