'use client';

import { useEffect, useRef, type RefObject } from 'react';
import { toTrackBlock } from '@/components/canvas/track-block';
import { TrackBlocks } from '@/components/canvas/track-blocks';
import type { TrackWindowView } from '@/lib/views/analysis-view';
import { api } from './api-client';
import { analysisPath } from './use-analysis';

/**
 * Tracks around the frame shown, fetched in windows of frames; null until the analysis has tracks.
 * A ref, since the canvas reads it outside React.
 *
 * @param ready null before there are tracks; tracks are fetched anew when it changes.
 * @param onChange told when there is something new to draw.
 */
export function useTrackWindow(
  analysisId: string,
  frames: number,
  ready: string | null,
  onChange: () => void,
): RefObject<TrackBlocks | null> {
  const blocks = useRef<TrackBlocks | null>(null);
  useEffect(() => {
    if (ready === null) return;
    const load = async (from: number, to: number, signal: AbortSignal) =>
      toTrackBlock(
        await api<TrackWindowView>(`${analysisPath(analysisId)}/tracks?from=${from}&to=${to}`, { signal }),
      );
    const made = new TrackBlocks(frames, load, onChange);
    blocks.current = made;
    onChange();
    return () => {
      made.close();
      blocks.current = null;
    };
  }, [analysisId, frames, ready, onChange]);
  return blocks;
}
