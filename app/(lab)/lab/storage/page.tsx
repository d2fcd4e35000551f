import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { FileChecks } from '@/components/lab/file-checks';
import { MarginNote } from '@/components/ui/margin-note';
import { ProgressThread } from '@/components/ui/progress-thread';
import { Facts, Section } from '@/components/ui/sheet';
import { formatBytes } from '@/lib/format/bytes';
import { countOf, formatCount } from '@/lib/format/count';
import { labStorage } from '@/models/queries/storage';
import { LabFrame } from '../lab-frame';

export const metadata: Metadata = { title: 'Storage' };

export default async function StoragePage() {
  const viewer = await requireViewer('see-storage', '/lab/storage');
  const storage = await labStorage(viewer.labId);
  const { recordings, bytes, arrivingBytes, freeBytes, quotaBytes } = storage;
  const used = bytes + arrivingBytes;
  return (
    <LabFrame viewer={viewer} tab="storage" margin={<StoreNotes used={used} quotaBytes={quotaBytes} />}>
      <Section
        title="Kept"
        count={`${formatBytes(used)} of ${formatBytes(quotaBytes)} that this laboratory may keep`}
      >
        <div className="py-2">
          <ProgressThread
            stages={[{ beads: BEADS, filled: beadsOf(used / quotaBytes) }]}
            label={`${percentOf(used, quotaBytes)} of what may be kept`}
            tone={used > NEARLY * quotaBytes ? 'amber' : 'ink'}
          />
        </div>
        <Facts
          items={[
            { name: 'Recordings', value: formatCount(recordings) },
            { name: 'Stored', value: formatBytes(bytes) },
            {
              name: 'Of it',
              value: `${countOf(storage.rehearsals.recordings, 'rehearsal')}, ${formatBytes(storage.rehearsals.bytes)}`,
            },
            { name: 'Arriving', value: formatBytes(arrivingBytes) },
            { name: 'May keep', value: formatBytes(quotaBytes) },
            { name: 'Free on disk', value: freeBytes === null ? 'unknown' : formatBytes(freeBytes) },
          ]}
        />
      </Section>
      <Suspense>
        <FileChecks mayAsk={may(viewer, 'check-files')} initial={storage} />
      </Suspense>
    </LabFrame>
  );
}

/** Beads of the thread that fills as the store does. */
const BEADS = 20;
/** From this share on the thread is amber and the margin says so. */
const NEARLY = 0.9;

// In halves, rounded down: a bead that begins to fill says nothing of a thousandth.
const beadsOf = (share: number) => Math.min(BEADS, Math.floor(2 * BEADS * share) / 2);
const percentOf = (part: number, whole: number) => `${Math.round((100 * part) / whole)} %`;

function StoreNotes({ used, quotaBytes }: { used: number; quotaBytes: number }) {
  return (
    <>
      {used > NEARLY * quotaBytes ? (
        <MarginNote tone="warning" title="Nearly full">
          {percentOf(used, quotaBytes)} of what this laboratory may keep is used. A stack that does not fit is
          refused before it is sent. Remove recordings, or have the bound raised by whoever runs Beadline.
        </MarginNote>
      ) : null}
      <MarginNote title="How stacks are kept">
        As they were sent, under random names in the data folder. Their SHA-256 stands on the page of each
        recording.
      </MarginNote>
      <MarginNote title="Checks">
        Every night the files that were looked at longest ago are read again and compared with their SHA-256.
        Damage is mailed to the administrators and stands on the overview.
      </MarginNote>
    </>
  );
}
