import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { QueuePanel } from '@/components/lab/queue-panel';
import { LabFrame } from '../lab-frame';

export const metadata: Metadata = { title: 'Queue and workers' };

export default async function QueuePage() {
  const viewer = await requireViewer('see-queue', '/lab/queue');
  return (
    <LabFrame viewer={viewer} tab="queue">
      <Suspense>
        <QueuePanel />
      </Suspense>
    </LabFrame>
  );
}
