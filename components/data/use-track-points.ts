'use client';

import { useQuery } from '@tanstack/react-query';
import { trackPoints } from './corrections-api';

/**
 * A track as it is stored, with the errors of its positions; null without one.
 * @param track null where none is chosen, or it has no number of the server's yet.
 * @param revision of the tracks: asked anew when it changes.
 */
export function useTrackPoints(analysisId: string, track: number | null, revision: number) {
  return useQuery({
    queryKey: ['analysis', analysisId, 'track-points', track, revision],
    enabled: track !== null,
    queryFn: ({ signal }) => trackPoints(analysisId, track!, signal),
    staleTime: Infinity,
  });
}
