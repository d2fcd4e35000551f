import type { ReactNode } from 'react';
import { StateBead } from './state-bead';

/** Nothing here yet: a thread with one dashed bead, one sentence, one action. */
export function EmptyState({
  children,
  hint,
  action,
}: {
  children: ReactNode;
  hint?: ReactNode;
  action?: ReactNode;
}) {
  return (
    <div className="border-y border-line py-3 text-center">
      <svg width="220" height="18" aria-hidden="true" className="mx-auto block max-w-full">
        <path d="M0 9H220" className="stroke-line-strong" />
        <circle
          cx="110"
          cy="9"
          r="5"
          className="fill-paper stroke-line-strong"
          strokeWidth="1.5"
          strokeDasharray="3 2"
        />
      </svg>
      <p>{children}</p>
      {hint ? <p className="pt-[3px] text-ink-2">{hint}</p> : null}
      {action ? <div className="pt-[9px]">{action}</div> : null}
    </div>
  );
}

/** What is wrong, what to do, at the place where it happened. `live` reads it out when it appears. */
export function ErrorState({
  what,
  children,
  action,
  live = false,
}: {
  what: ReactNode;
  children?: ReactNode;
  action?: ReactNode;
  live?: boolean;
}) {
  return (
    <div role={live ? 'alert' : undefined} className="text-note">
      <p>
        <StateBead state="failed" className="mr-[7px] inline-block" />
        <span className="font-strong text-red-text">{what}</span> {children}
      </p>
      {action ? <div className="pt-2">{action}</div> : null}
    </div>
  );
}

/** Numbers that have been overtaken: old values stay, with the way to the new ones. */
export function StaleLine({ what, children }: { what: ReactNode; children?: ReactNode }) {
  return (
    <p className="text-note">
      <StateBead state="stale" className="mr-[7px] inline-block" />
      <span className="font-strong">{what}</span> {children}
    </p>
  );
}

/** The page exists but isn't for this person: the sentence names who can. */
export function NoPermission({ children }: { children: ReactNode }) {
  return (
    <div className="border-y border-line py-4">
      <p>
        <StateBead state="stopped" className="mr-[7px] inline-block" />
        {children}
      </p>
    </div>
  );
}
