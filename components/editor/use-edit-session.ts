'use client';

import { useCallback, useEffect, useMemo, useState } from 'react';
import { TrackBlocks } from '@/components/canvas/track-blocks';
import { toTrackBlock } from '@/components/canvas/track-block';
import type { ViewedRecording } from '@/components/canvas/viewer-panel';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import { api, ApiError } from '@/components/data/api-client';
import {
  correctionReader,
  correctionsApi,
  refinePoint,
  sayHere,
  signedBy,
  trackPoints,
} from '@/components/data/corrections-api';
import { analysisPath } from '@/components/data/use-analysis';
import { newId } from '@/lib/ids';
import type { AnalysisView, TrackWindowView } from '@/lib/views/analysis-view';
import type { CorrectionList } from '@/lib/views/correction-view';
import { FIND_FIELD } from './chosen-facts';
import { EditController } from './edit-controller';
import { EditSession } from './edit-session';
import { BrowserGestureStore, showTab } from './log/kept-gestures';
import type { PersonHere } from './people-here';

/** How often this page says that it is here, and hears who else is and what they did, ms. */
const HERE_EVERY_MS = 5_000;

export interface EditorSetup {
  analysisId: string;
  userId: string;
  /** The newest part of the log on the server when the page was made, oldest first. */
  initial: Pick<CorrectionList, 'revision' | 'nextTrack' | 'items'>;
  /** Who has signed the analysis off; null while it can be changed. */
  closed: string | null;
  readOnly: string | null;
}

interface Setup extends EditorSetup {
  viewer: ViewerStore;
  recording: ViewedRecording;
  track: number | null;
}

export interface Editor {
  session: EditSession;
  controller: EditController;
  people: readonly PersonHere[];
  /** Goes to a track by its number; a sentence when there is none. */
  find: (track: number) => Promise<string | null>;
}

/** Everything that works behind the editor's page, for the life of the page. */
export function useEditSession(setup: Setup): Editor {
  const { analysisId, userId, readOnly, recording, viewer } = setup;
  const [{ session, controller, tab }] = useState(() => make(setup));
  const [people, setPeople] = useState<readonly PersonHere[]>([]);

  useEffect(() => {
    const load = async (from: number, to: number, signal: AbortSignal) =>
      toTrackBlock(
        await api<TrackWindowView>(`${analysisPath(analysisId)}/tracks?from=${from}&to=${to}`, { signal }),
      );
    const made = new TrackBlocks(recording.frames, load, () => session.blocksChanged());
    session.attach(made);
    return () => {
      session.attach(null);
      made.close();
    };
  }, [analysisId, recording.frames, session]);

  useEffect(() => {
    showTab(tab);
    void session.resume();
    void session.renewMarks();
    return () => session.close();
  }, [session, tab]);

  useEffect(() => {
    let lost = false;
    const beat = async () => {
      try {
        const here =
          readOnly === null ? sayHere(analysisId, userId, viewer.get().frame) : Promise.resolve([]);
        const analysis = await api<AnalysisView>(analysisPath(analysisId));
        session.news(signedBy(analysis), analysis.staleSince);
        if (analysis.correctionsRevision > session.log.revision) await session.catchUp();
        setPeople(await here);
        if (lost) session.blocks?.renew();
        if (lost || session.marksBehind) void session.renewMarks();
        lost = false;
        void session.kick();
      } catch (error) {
        if (!(error instanceof ApiError)) throw error;
        lost = true;
      }
    };
    const back = () => void beat();
    const timer = setInterval(back, HERE_EVERY_MS);
    window.addEventListener('online', back);
    back();
    return () => {
      clearInterval(timer);
      window.removeEventListener('online', back);
    };
  }, [analysisId, userId, readOnly, session, viewer]);

  const find = useCallback(
    async (track: number) => {
      try {
        // What is here needs no link, and may be newer than what is stored.
        const points = session.track(track)?.points ?? (await trackPoints(analysisId, track));
        if (!points) return `There is no track ${track} now.`;
        const { frame } = viewer.get();
        const [first, last] = [points.frame[0], points.frame[points.frame.length - 1]];
        if (frame < first || frame > last) viewer.goTo(Math.round((first + last) / 2));
        controller.choose(track);
        controller.bringWhenShown(track);
        document.querySelector<HTMLElement>('[role=application]')?.focus({ preventScroll: true });
        return null;
      } catch (error) {
        if (error instanceof ApiError) return error.message;
        throw error;
      }
    },
    [analysisId, session, viewer, controller],
  );

  return useMemo(() => ({ session, controller, people, find }), [session, controller, people, find]);
}

function make({ analysisId, userId, initial, closed, readOnly, viewer, recording, track }: Setup) {
  const read = correctionReader();
  const tab = newId();
  const { width, height, frames } = recording;
  const session = new EditSession({
    analysisId,
    userId,
    tab,
    viewer,
    extent: { width, height, frames },
    api: correctionsApi(analysisId, read),
    store: new BrowserGestureStore(),
    newId,
    initial: {
      revision: initial.revision,
      nextNumber: initial.nextTrack,
      corrections: read(initial.items),
    },
    closed,
    readOnly,
  });
  const controller = new EditController({
    session,
    viewer,
    image: { width, height },
    refine: (frame, at) => refinePoint(analysisId, frame, at),
    onFind: () => document.getElementById(FIND_FIELD)?.focus(),
  });
  if (track !== null) viewer.set({ chosenTrack: track });
  return { session, controller, tab };
}
