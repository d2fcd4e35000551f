'use client';

import { useEffect, useState, useSyncExternalStore } from 'react';
import { uploadMemory } from '@/lib/uploads/upload-memory';
import { UploadQueue } from './upload-queue';

/** One queue per run for the life of the tab: leaving the page for another does not stop it. */
const queues = new Map<string, UploadQueue>();

function queueOf(runId: string): UploadQueue {
  const found = queues.get(runId);
  if (found) return found;
  const made = new UploadQueue(
    runId,
    uploadMemory(() => window.localStorage),
  );
  queues.set(runId, made);
  return made;
}

const none: ReturnType<UploadQueue['get']> = [];

/** Uploads of a run, with a warning before the tab is closed on them and a new try when the link returns. */
export function useUploadQueue(runId: string) {
  const [queue] = useState(() => queueOf(runId));
  const items = useSyncExternalStore(queue.subscribe, queue.get, () => none);
  useEffect(() => {
    const warn = (event: BeforeUnloadEvent) => {
      if (queue.atWork()) event.preventDefault();
    };
    const goOn = () => queue.resumeLost();
    window.addEventListener('beforeunload', warn);
    window.addEventListener('online', goOn);
    return () => {
      window.removeEventListener('beforeunload', warn);
      window.removeEventListener('online', goOn);
    };
  }, [queue]);
  return { queue, items };
}
