import type { CandidateFacts } from '../analysis-facts';
import type { Verdict } from '../review/verdict-words';

interface Estimated {
  value: number;
  uncertainty: number;
}

/** Whether the picture of its frames is there, being made, or can't be made any more. */
export type StripState = 'there' | 'composing' | 'none';

/** A reconnection as a report shows it: the strip of its frames and what was measured of it. */
export interface ReportedEvent {
  id: string;
  runName: string;
  event: number;
  /** Whether people took it for one; else the machine accepts it and nobody has decided. */
  confirmed: boolean;
  t0S: number;
  t0ErrorS: number | null;
  exponentBefore: Estimated | null;
  exponentAfter: Estimated | null;
  qValue: number | null;
  strip: StripState;
}

/** A report shows what reconnections look like; all of them are in the data package. */
export const REPORTED_EVENTS_MOST = 8;

/** An event before anybody has looked for its strip. */
export type PickedEvent = Omit<ReportedEvent, 'strip'> & { analysisId: string };

interface Shown {
  id: string;
  analysisId: string;
  event: number;
  verdict: Verdict | null;
  facts: Pick<CandidateFacts, 't0S' | 't0ErrorS' | 'before' | 'after' | 'qValue'>;
}

/**
 * Reconnections that a report shows, in the order of its runs: the first one of every run before any second one.
 * @param shown those of an analysis in the order in which they matter
 */
export function reportedEvents(
  shown: readonly Shown[],
  analyses: readonly { id: string; runName: string }[],
): PickedEvent[] {
  const placed = analyses.flatMap(({ id, runName }, run) =>
    shown
      .filter(({ analysisId }) => analysisId === id)
      .map((one, place) => ({ run, place, event: eventOf(one, runName) })),
  );
  return placed
    .sort((a, b) => a.place - b.place || a.run - b.run)
    .slice(0, REPORTED_EVENTS_MOST)
    .sort((a, b) => a.run - b.run || a.place - b.place)
    .map(({ event }) => event);
}

function eventOf({ id, analysisId, event, verdict, facts }: Shown, runName: string): PickedEvent {
  const { t0S, t0ErrorS, before, after, qValue } = facts;
  const exponent = (side: typeof before) => {
    const { exponent: value = null, exponentError: uncertainty = null } = side ?? {};
    return value === null || uncertainty === null ? null : { value, uncertainty };
  };
  return {
    ...{ id, analysisId, runName, event, t0S, t0ErrorS, qValue },
    confirmed: verdict === 'yes',
    exponentBefore: exponent(before),
    exponentAfter: exponent(after),
  };
}
