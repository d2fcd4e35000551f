import type { ReconnectionCandidate } from '@/tracking/pairs/candidate';
import { csvChunks } from './csv-chunks';
import { decimals, significant } from './number-text';

export const RECONNECTIONS_COLUMNS =
  'event,track_a,track_b,t0_s,x_px,y_px,min_separation_m,amplitude_before,amplitude_after,exponent_before,exponent_after,p_chance,q_value,verdict';

export type VerdictText = 'yes' | 'no' | 'cannot-tell' | '';

/** What a row needs of a candidate, so that stored candidates can be written without their series. */
export type ReconnectionRow = {
  /** Number of the event; its place in the list where left out. */
  event?: number;
} & Pick<
  ReconnectionCandidate,
  'trackA' | 'trackB' | 't0S' | 'xPx' | 'yPx' | 'minSeparationM' | 'pChance' | 'qValue'
> & {
    before: Pick<NonNullable<ReconnectionCandidate['before']>, 'amplitude' | 'exponent'> | null;
    after: Pick<NonNullable<ReconnectionCandidate['after']>, 'amplitude' | 'exponent'> | null;
  };

/**
 * `reconnections.csv` in pieces.
 * @param verdictOf the people's verdict on an event, empty where nobody judged.
 */
export function reconnectionsCsv(
  candidates: Iterable<ReconnectionRow>,
  verdictOf: (event: number) => VerdictText = () => '',
): Generator<string> {
  function* rows() {
    let place = 0;
    for (const c of candidates) {
      const event = c.event ?? place;
      yield [
        event,
        c.trackA,
        c.trackB,
        significant(c.t0S, 10),
        decimals(c.xPx, 4),
        decimals(c.yPx, 4),
        significant(c.minSeparationM, 7),
        significant(c.before?.amplitude ?? null, 6),
        significant(c.after?.amplitude ?? null, 6),
        significant(c.before?.exponent ?? null, 6),
        significant(c.after?.exponent ?? null, 6),
        significant(c.pChance, 6),
        significant(c.qValue, 6),
        verdictOf(event),
      ].join(',');
      place++;
    }
  }
  return csvChunks(RECONNECTIONS_COLUMNS, rows());
}
