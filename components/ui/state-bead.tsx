import type { ReactNode } from 'react';

export type BeadState =
  'waiting' | 'running' | 'done' | 'failed' | 'stopped' | 'stale' | 'signed' | 'warning' | 'caution';

// The shape tells the state; the hue only repeats it.
const GLYPHS: Record<BeadState, ReactNode> = {
  waiting: <circle cx="5.5" cy="5.5" r="4" className="fill-none stroke-ink-2" strokeWidth="1.5" />,
  running: (
    <>
      <circle cx="5.5" cy="5.5" r="4" className="fill-none stroke-violet" strokeWidth="1.5" />
      <path d="M5.5 1.5a4 4 0 0 1 0 8z" className="fill-violet" />
    </>
  ),
  done: <circle cx="5.5" cy="5.5" r="4.75" className="fill-green" />,
  failed: (
    <g className="fill-none stroke-red" strokeWidth="1.5">
      <circle cx="5.5" cy="5.5" r="4" />
      <path d="M3 3l5 5M8 3l-5 5" />
    </g>
  ),
  stopped: <rect x="1.5" y="1.5" width="8" height="8" className="fill-none stroke-ink-2" strokeWidth="1.5" />,
  stale: (
    <circle
      cx="5.5"
      cy="5.5"
      r="4"
      className="fill-none stroke-amber"
      strokeWidth="1.5"
      strokeDasharray="2.5 1.7"
    />
  ),
  signed: (
    <>
      <circle cx="5.5" cy="5.5" r="4.75" className="fill-ink" />
      <path d="M3.2 5.6l1.7 1.7 3-3.4" className="fill-none stroke-paper" strokeWidth="1.4" />
    </>
  ),
  warning: (
    <g className="fill-none stroke-amber" strokeLinejoin="round">
      <path d="M5.5.6L10.6 10H.4z" strokeWidth="1.5" />
      <path d="M5.5 4v3M5.5 8v1" strokeWidth="1.3" />
    </g>
  ),
  caution: (
    <g className="fill-none stroke-red" strokeLinejoin="round">
      <path d="M5.5.3l5.2 5.2-5.2 5.2L.3 5.5z" strokeWidth="1.5" />
      <path d="M5.5 3v3.4M5.5 7.4v1" strokeWidth="1.3" />
    </g>
  ),
};

/** The 11 px glyph of a state, hidden from screen readers: it always stands beside its word. */
export function StateBead({ state, className = '' }: { state: BeadState; className?: string }) {
  return (
    <svg
      viewBox="0 0 11 11"
      aria-hidden="true"
      className={`size-[11px] shrink-0 overflow-visible ${className}`}
    >
      {GLYPHS[state]}
    </svg>
  );
}

/** A state as glyph and word, on one line: `<StateWord state="running">linking, 65 %</StateWord>`. */
export function StateWord({ state, children }: { state: BeadState; children: ReactNode }) {
  return (
    <span className="inline-flex items-center gap-[7px] whitespace-nowrap">
      <StateBead state={state} />
      <span>{children}</span>
    </span>
  );
}
