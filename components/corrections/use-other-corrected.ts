'use client';

import { useQuery } from '@tanstack/react-query';
import { api } from '@/components/data/api-client';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { ListView } from '@/lib/views/common';

/** Other finished analyses of the same recording that have corrections, newest first. */
export function useOtherCorrected({ id, recordingId }: AnalysisView, enabled: boolean) {
  return useQuery({
    queryKey: ['analyses-of-recording', recordingId, id],
    enabled,
    queryFn: async ({ signal }) => {
      const path = `/api/v1/recordings/${recordingId}/analyses?state=done&sort=-createdAt&limit=200`;
      const { items } = await api<ListView<AnalysisView>>(path, { signal });
      return items.filter((one) => one.id !== id && one.correctionsRevision > 0);
    },
  });
}
