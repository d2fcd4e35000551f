'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Button } from '@/components/ui/button';
import { ConfirmDialog } from '@/components/ui/dialog';
import { ProgressThread } from '@/components/ui/progress-thread';
import { StateBead } from '@/components/ui/state-bead';
import { filledBeads } from '@/components/ui/thread-beads';
import { formatBytesOf } from '@/lib/format/bytes';
import { percentOf, type ArrivingRecording } from '@/lib/uploads/arriving';
import type { Dropped } from './dropped-files';
import { ChooseButton } from './file-buttons';
import { endUpload } from './send-file';
import type { UploadQueue } from './upload-queue';
import { uploadsKey } from './uploads-key';

const BEADS = 20;

/** An upload that another page or another day began: it waits for its file. */
export function ArrivingRow({
  open,
  queue,
  runId,
}: {
  open: ArrivingRecording;
  queue: UploadQueue;
  runId: string;
}) {
  const [problem, setProblem] = useState<string | null>(null);
  const [asking, setAsking] = useState(false);
  const client = useQueryClient();
  const folder = open.folderId !== null;
  const name = folder ? `a folder with ${open.filename}` : open.filename;
  const percent = percentOf(open.receivedBytes, open.bytes);

  const onChosen = async ({ files, folders }: Dropped) => {
    if (folder) setProblem(queue.resumeFolder(open, folders[0] ?? []));
    else if (files[0]) setProblem(await queue.resumeFile(open, files[0]));
  };
  const onEnd = async () => {
    for (const { id } of open.uploads) await endUpload(id);
    await client.invalidateQueries({ queryKey: uploadsKey(runId) });
  };

  return (
    <li className="grid grid-cols-[minmax(0,1fr)_auto] items-center gap-x-4 gap-y-1 border-b border-line py-[6px]">
      <div className="min-w-0">
        <p className="flex items-center gap-[7px]">
          <StateBead state="stopped" />
          <span className="min-w-0 truncate">{name}</span>
        </p>
        <div className="flex flex-wrap items-center gap-x-3">
          <ProgressThread
            stages={[{ beads: BEADS, filled: filledBeads(open.receivedBytes / open.bytes, BEADS) }]}
            tone="amber"
            label={`${name}: ${percent} % received`}
          />
          <span className="text-note tabular-nums text-ink-2">
            {percent} % received ({formatBytesOf(open.receivedBytes, open.bytes)}), choose the same{' '}
            {folder ? 'folder' : 'file'} to continue
          </span>
        </div>
        {problem ? (
          <p role="alert" className="text-note text-red-text">
            {problem}
          </p>
        ) : null}
      </div>
      <div className="flex gap-2">
        <ChooseButton folder={folder} onChosen={(dropped) => void onChosen(dropped)}>
          {folder ? 'Choose the folder' : 'Choose the file'}
        </ChooseButton>
        <Button kind="bare" onClick={() => setAsking(true)} aria-label={`End ${name}`}>
          End
        </Button>
      </div>
      <ConfirmDialog
        open={asking}
        onClose={() => setAsking(false)}
        question={`End the upload of ${name}?`}
        keep="Keep it"
        act="End it"
        onAct={onEnd}
      >
        What has arrived of it is thrown away. Your own file stays as it is.
      </ConfirmDialog>
    </li>
  );
}
