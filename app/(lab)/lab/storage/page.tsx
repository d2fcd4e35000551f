import type { Metadata } from 'next';
import { requireViewer } from '@/auth/page';
import { Facts } from '@/components/ui/sheet';
import { formatBytes } from '@/lib/format/bytes';
import { formatCount } from '@/lib/format/count';
import { labStorage } from '@/models/queries/storage';
import { LabFrame } from '../lab-frame';

export const metadata: Metadata = { title: 'Storage' };

export default async function StoragePage() {
  const viewer = await requireViewer('see-storage', '/lab/storage');
  const { recordings, bytes, arrivingBytes, freeBytes, quotaBytes } = await labStorage(viewer.labId);
  return (
    <LabFrame viewer={viewer} tab="storage">
      <Facts
        items={[
          { name: 'Recordings', value: formatCount(recordings) },
          { name: 'Stored', value: formatBytes(bytes) },
          { name: 'May keep', value: formatBytes(quotaBytes) },
          { name: 'Arriving', value: formatBytes(arrivingBytes) },
          { name: 'Free', value: freeBytes === null ? 'unknown' : formatBytes(freeBytes) },
        ]}
      />
      <p className="max-w-[70ch] pt-4 text-note text-ink-2">
        Stacks are kept as they were sent, under random names in the data folder. Their SHA-256 stands on the
        page of each recording.
      </p>
    </LabFrame>
  );
}
