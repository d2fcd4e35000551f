import { placeBeads, type ThreadStage } from './thread-beads';

interface ProgressThreadProps {
  stages: readonly ThreadStage[];
  /** How far it is, in words; the count also stands beside the thread as text. */
  label: string;
  tone?: 'ink' | 'amber' | 'red';
}

const R_PX = 3.1;

/** Progress as beads filling along a thread; amber where it stopped, red where it failed. */
export function ProgressThread({ stages, label, tone = 'ink' }: ProgressThreadProps) {
  const { beads, widthPx, doneToPx } = placeBeads(stages);
  const text = { ink: 'text-ink', amber: 'text-amber', red: 'text-red' }[tone];
  return (
    <svg
      width={widthPx}
      height="12"
      viewBox={`0 0 ${widthPx} 12`}
      role="img"
      aria-label={label}
      className={`block h-auto max-w-full ${text}`}
    >
      <path d={`M0 6H${widthPx}`} className="stroke-line-strong" />
      <path d={`M0 6H${doneToPx}`} stroke="currentColor" strokeWidth="1.5" />
      {beads.map(({ x, fill }) => {
        if (fill === 'full') return <circle key={x} cx={x} cy="6" r={R_PX + 0.4} fill="currentColor" />;
        if (fill === 'empty') {
          return (
            <circle
              key={x}
              cx={x}
              cy="6"
              r={R_PX - 0.2}
              className="fill-paper stroke-line-strong"
              strokeWidth="1.1"
            />
          );
        }
        return (
          <g key={x}>
            <circle cx={x} cy="6" r={R_PX} className="fill-paper" stroke="currentColor" strokeWidth="1.4" />
            <path d={`M${x} ${6 + R_PX}a${R_PX} ${R_PX} 0 0 1 0 ${-2 * R_PX}z`} fill="currentColor" />
          </g>
        );
      })}
    </svg>
  );
}
