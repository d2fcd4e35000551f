'use client';

import { useState, type FormEvent } from 'react';
import { useViewer } from '@/components/canvas/use-viewer';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import { useTrackPoints } from '@/components/data/use-track-points';
import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';
import { StrokeSample } from '@/components/ui/strokes';
import { probabilityText } from '@/components/canvas/track-words';
import { formatCount } from '@/lib/format/count';
import { isMeasured } from '@/tracking/corrections/edited-track';
import { placeIn } from './edit-actions';
import type { EditSession } from './edit-session';
import { isProvisional, trackName } from './log/gesture';
import { useEdit } from './use-edit';

const POPULATIONS = ['trapped', 'free', 'undecided'] as const;

/** The chosen track in words and numbers, for those who read rather than look. */
export function ChosenFacts({
  analysisId,
  session,
  viewer,
}: {
  analysisId: string;
  session: EditSession;
  viewer: ViewerStore;
}) {
  useEdit(session.state, (state) => state.version);
  const chosen = useViewer(viewer, (state) => state.chosenTrack);
  const frame = useViewer(viewer, (state) => state.shown);
  const revision = useEdit(session.state, (state) => state.revision);
  const named = chosen === null || isProvisional(chosen) ? null : chosen;
  const stored = useTrackPoints(analysisId, named, revision);
  const shown = session.track(chosen);
  if (chosen === null) return <p className="text-note text-ink-2">No track is chosen.</p>;
  if (!shown) return <p className="text-note text-ink-2">{trackName(chosen)} is not in these frames.</p>;
  const { points, population, pTrapped } = shown;
  const name = POPULATIONS[population];
  const place = placeIn(shown, frame);
  const i = frame - points.frame[0];
  const own = place !== null && isMeasured(points, i);
  const at = stored.data?.frame.indexOf(frame) ?? -1;
  // A point that was set just now is known here; all others as they are stored.
  const [sx, sy] = [points.sxPx[i], points.syPx[i]].map((s, axis) =>
    Number.isFinite(s) ? s : (stored.data?.[axis === 0 ? 'sx_px' : 'sy_px'][at] ?? Number.NaN),
  );
  const missed = points.flags.reduce((sum, _, k) => sum + (isMeasured(points, k) ? 0 : 1), 0);
  return (
    <dl className="grid grid-cols-[92px_minmax(0,1fr)] gap-x-3 gap-y-[3px] text-note tabular-nums">
      <dt className="text-ink-2">Track</dt>
      <dd className="font-strong">{trackName(chosen).replace(/^track /, '')}</dd>
      <dt className="text-ink-2">Class</dt>
      <dd className="flex items-center gap-2">
        {name ? <StrokeSample stroke={name} /> : null}
        {name ?? 'none yet'}
        {Number.isFinite(pTrapped) ? `, p trapped ${probabilityText(pTrapped)}` : ''}
      </dd>
      <dt className="text-ink-2">Frames</dt>
      <dd>
        {formatCount(points.frame[0])} to {formatCount(points.frame[points.frame.length - 1])}, missed in{' '}
        {formatCount(missed)}
      </dd>
      <dt className="text-ink-2">Here</dt>
      <dd>
        {place === null
          ? `not in frame ${formatCount(frame)}`
          : `x ${place.x.toFixed(2)}, y ${place.y.toFixed(2)} px${own ? errorText(sx, sy) : ', missed: between its neighbours'}`}
      </dd>
    </dl>
  );
}

const errorText = (sx: number, sy: number) =>
  Number.isFinite(sx) && Number.isFinite(sy) ? `, ± ${sx.toFixed(2)} and ± ${sy.toFixed(2)} px` : '';

export const FIND_FIELD = 'find-track';

interface FindTrackProps {
  /** @returns a sentence when there is no such track. */
  onFind: (track: number) => Promise<string | null>;
}

/** Goes to a track by its number. */
export function FindTrack({ onFind }: FindTrackProps) {
  const [text, setText] = useState('');
  const [error, setError] = useState<string | undefined>();
  const [busy, setBusy] = useState(false);
  const find = async (event: FormEvent) => {
    event.preventDefault();
    const track = Number(text.replace(/\s/g, ''));
    if (text.trim() === '' || !Number.isInteger(track) || track < 0) {
      setError('Enter the number of a track, from 0.');
      return;
    }
    setBusy(true);
    const problem = await onFind(track);
    setBusy(false);
    setError(problem ?? undefined);
    if (problem === null) setText('');
  };
  return (
    <form onSubmit={(event) => void find(event)} className="flex items-end gap-2 pb-3">
      <Field
        id={FIND_FIELD}
        label="Track by its number"
        inputMode="numeric"
        value={text}
        error={error}
        onChange={(event) => {
          setText(event.target.value);
          setError(undefined);
        }}
        className="flex-1"
      />
      <Button type="submit" busy={busy} keyCap="N">
        Go
      </Button>
    </form>
  );
}
