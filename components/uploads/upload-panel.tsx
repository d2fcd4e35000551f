'use client';

import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useEffect, useState, type DragEvent } from 'react';
import { api } from '@/components/data/api-client';
import { Answer } from '@/components/data/answer';
import type { ListView } from '@/lib/views/common';
import type { UploadView } from '@/lib/views/recording-view';
import { ArrivingRow } from './arriving-row';
import { readDrop, type Dropped } from './dropped-files';
import { ChooseButton } from './file-buttons';
import { openUploads } from './upload-queue';
import { UploadRow } from './upload-row';
import { uploadsKey } from './uploads-key';
import { useUploadQueue } from './use-upload-queue';

const ARRIVING_LIMIT = 200;

/** Where stacks come in: drop or choose files, watch them go, go on with those of another day. */
export function UploadPanel({ runId }: { runId: string }) {
  const { queue, items } = useUploadQueue(runId);
  const client = useQueryClient();
  const [over, setOver] = useState(false);
  const [problem, setProblem] = useState<string | null>(null);
  const uploads = useQuery({
    queryKey: uploadsKey(runId),
    queryFn: ({ signal }) =>
      api<ListView<UploadView>>(`/api/v1/runs/${runId}/uploads?limit=${ARRIVING_LIMIT}`, { signal }),
  });
  const open = openUploads(uploads.data?.items ?? [], items);

  // A stack that begins or ends its way changes the lists beside this panel.
  const seen = items.map(({ recordingId, state }) => `${recordingId} ${state === 'received'}`).join();
  useEffect(() => {
    if (seen === '') return;
    void client.invalidateQueries({ queryKey: ['list'] });
    void client.invalidateQueries({ queryKey: uploadsKey(runId) });
  }, [client, runId, seen]);

  const take = ({ files, folders }: Dropped) => {
    setProblem(folders.map((entries) => queue.addFolder(entries, open)).find(Boolean) ?? null);
    void queue.addFiles(files, open);
  };
  const onDrop = (event: DragEvent) => {
    event.preventDefault();
    setOver(false);
    void readDrop(event.dataTransfer).then(take);
  };

  return (
    <section aria-label="Upload">
      <div
        onDragOver={(event) => {
          event.preventDefault();
          setOver(true);
        }}
        onDragLeave={() => setOver(false)}
        onDrop={onDrop}
        className={`flex flex-wrap items-center gap-x-4 gap-y-2 border-y border-dashed px-1 py-3 ${over ? 'border-violet bg-violet-wash' : 'border-line-strong'}`}
      >
        <svg width="34" height="12" aria-hidden="true" className="max-hand:hidden">
          <path d="M0 6H34" className="stroke-line-strong" strokeDasharray="4 3" strokeWidth="1.5" />
          <circle cx="17" cy="6" r="4.5" className="fill-paper stroke-line-strong" strokeWidth="1.5" />
        </svg>
        <p className="text-ink-2 max-hand:hidden">
          Drop TIFF stacks, a ZIP, an NPY or HDF5 file or a folder of frames here. Several at once are fine.
        </p>
        <span className="flex gap-2 hand:ml-auto">
          <ChooseButton kind={items.length === 0 ? 'main' : 'outlined'} multiple onChosen={take}>
            Choose files
          </ChooseButton>
          <ChooseButton folder onChosen={take}>
            Choose a folder
          </ChooseButton>
        </span>
      </div>
      {problem ? (
        <p role="alert" className="pt-2 text-note text-red-text">
          {problem}
        </p>
      ) : null}
      {items.length > 0 ? (
        <ul aria-label="Uploads">
          {items.map((item) => (
            <UploadRow key={item.key} item={item} queue={queue} />
          ))}
        </ul>
      ) : null}
      <Answer query={uploads} what="the uploads of this run">
        {() =>
          open.length > 0 ? (
            <div className="pt-3">
              <h3 className="text-small font-strong text-ink-2">Waiting for their file</h3>
              <ul>
                {open.map((recording) => (
                  <ArrivingRow key={recording.recordingId} open={recording} queue={queue} runId={runId} />
                ))}
              </ul>
            </div>
          ) : null
        }
      </Answer>
    </section>
  );
}
