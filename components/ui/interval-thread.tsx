import { logGrid, shareOnLogAxis, type LogAxis, type ThreadInterval } from '@/lib/charts/log-axis';

interface IntervalThreadProps {
  intervals: readonly ThreadInterval[];
  axis: LogAxis;
  /** The interval in words. */
  label: string;
  widthPx?: number;
}

/** The same text on server and browser, whose logarithms may differ in the last digit. */
const percent = (share: number) => `${(share * 100).toFixed(2)}%`;

/** How sure: bead = value, thick thread = statistical, thin = with systematic, ring = prior or left out. */
export function IntervalThread({ intervals, axis, label, widthPx = 220 }: IntervalThreadProps) {
  const x = (value: number) => percent(shareOnLogAxis(value, axis));
  return (
    <svg
      role="img"
      aria-label={label}
      height="18"
      className="block w-full overflow-visible"
      style={{ maxWidth: widthPx }}
    >
      {logGrid(axis).map((value) => (
        <line key={value} x1={x(value)} x2={x(value)} y1="0" y2="18" className="stroke-line" />
      ))}
      {intervals
        .filter((item) => item.value > 0)
        .map((item, index) => (
          <Interval key={index} item={item} x={x} />
        ))}
    </svg>
  );
}

function Interval({ item, x }: { item: ThreadInterval; x: (value: number) => string }) {
  const hasWide = typeof item.wideLow === 'number' && typeof item.wideHigh === 'number' && item.wideHigh > 0;
  // An interval that reaches zero runs off the log axis at its left.
  const from = (low: number) => (low > 0 ? x(low) : '0%');
  return (
    <g className={item.tone === 'amber' ? 'text-amber' : 'text-ink'}>
      {hasWide ? (
        <line x1={from(item.wideLow!)} x2={x(item.wideHigh!)} y1="9" y2="9" className="stroke-ink-2" />
      ) : null}
      <line
        x1={from(item.low)}
        x2={x(item.high)}
        y1="9"
        y2="9"
        stroke="currentColor"
        strokeWidth={hasWide ? 3 : 1.5}
      />
      <circle
        cx={x(item.value)}
        cy="9"
        r={item.hollow ? 4 : 4.2}
        className={item.hollow ? 'fill-paper' : 'stroke-paper'}
        {...(item.hollow
          ? { stroke: 'currentColor', strokeWidth: 1.5 }
          : { fill: 'currentColor', strokeWidth: 1.2 })}
      />
    </g>
  );
}
