'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import type { AnalysisView } from '@/lib/views/analysis-view';
import { pollAfterMs } from './poll-pace';
import { analysisKey, analysisPath, isFinal, useAnalysis } from './use-analysis';

/** A stream that was lost is tried again after this long; until then the page asks by itself. */
const STREAM_AGAIN_MS = 30_000;

/**
 * An analysis with live progress: from the server's stream, and by asking again where no stream
 * gets through.
 */
export function useProgress(id: string, initial?: AnalysisView) {
  const client = useQueryClient();
  const [streaming, setStreaming] = useState(false);
  const [lostForMs, setLostForMs] = useState(0);
  const query = useAnalysis(id, initial, streaming ? false : pollAfterMs(lostForMs));
  const final = query.data ? isFinal(query.data) : false;

  useEffect(() => {
    if (final) return;
    let source: EventSource | null = null;
    let again: ReturnType<typeof setTimeout> | undefined;
    let lostAtMs = 0;
    const connect = () => {
      source = new EventSource(`${analysisPath(id)}/progress`);
      source.addEventListener('progress', (event: MessageEvent<string>) => {
        setStreaming(true);
        const view = JSON.parse(event.data) as AnalysisView;
        client.setQueryData(analysisKey(id), view);
        if (isFinal(view)) source?.close();
      });
      source.onerror = () => {
        // The browser would try again every few seconds for ever; asking is cheaper than that.
        source?.close();
        lostAtMs ||= Date.now();
        setStreaming(false);
        setLostForMs(Date.now() - lostAtMs);
        again = setTimeout(connect, STREAM_AGAIN_MS);
      };
    };
    connect();
    return () => {
      source?.close();
      clearTimeout(again);
      setStreaming(false);
    };
  }, [id, final, client]);

  return query;
}
