'use client';

import Link from 'next/link';
import { useState } from 'react';
import { useRecording } from '@/components/data/use-recording';
import { Button } from '@/components/ui/button';
import { ConfirmDialog } from '@/components/ui/dialog';
import { ProgressThread } from '@/components/ui/progress-thread';
import { StateBead, type BeadState } from '@/components/ui/state-bead';
import { filledBeads } from '@/components/ui/thread-beads';
import { formatBytes, formatBytesOf } from '@/lib/format/bytes';
import { countOf } from '@/lib/format/count';
import { formatTimeLeft } from '@/lib/format/duration';
import { percentOf } from '@/lib/uploads/arriving';
import type { UploadItem, UploadState } from './upload-item';
import type { UploadQueue } from './upload-queue';

const BEADS = 20;
const GLYPHS: Record<UploadState, BeadState> = {
  waiting: 'waiting',
  reading: 'running',
  sending: 'running',
  paused: 'stopped',
  received: 'done',
  failed: 'failed',
};

/** How far an upload is, in words. */
export function uploadWords(item: UploadItem): string {
  const amount = formatBytesOf(item.sentBytes, item.bytes);
  if (item.state === 'waiting') return `${formatBytes(item.bytes)}, waits for its turn`;
  if (item.state === 'reading') {
    return `reading it for the checksum, ${percentOf(item.readBytes, item.bytes)} %`;
  }
  if (item.state === 'received') return `${formatBytes(item.bytes)} received`;
  const words = [amount];
  if (item.kind === 'folder') words.push(`${item.filesDone} of ${countOf(item.files, 'file')}`);
  if (item.state === 'sending' && item.bytesPerS !== null) words.push(`${formatBytes(item.bytesPerS)}/s`);
  const left = item.state === 'sending' ? formatTimeLeft(item.secondsLeft) : '';
  if (left) words.push(`${left} left`);
  if (item.state === 'paused') words.push('paused');
  return words.join(', ');
}

/** One stack on its way: thread of beads, words, and what can be done. */
export function UploadRow({ item, queue }: { item: UploadItem; queue: UploadQueue }) {
  const [asking, setAsking] = useState(false);
  const { key, name, state } = item;
  const moving = state === 'sending' || state === 'waiting' || state === 'reading';
  const over = state === 'received' || state === 'failed';
  const tone = state === 'failed' ? 'red' : state === 'paused' ? 'amber' : 'ink';
  const share = item.bytes > 0 ? item.sentBytes / item.bytes : 0;
  return (
    <li className="grid grid-cols-[minmax(0,1fr)_auto] items-center gap-x-4 gap-y-1 border-b border-line py-[6px]">
      <div className="min-w-0">
        <p className="flex items-center gap-[7px]">
          <StateBead state={GLYPHS[state]} />
          <span className="min-w-0 truncate">{name}</span>
          {item.leftOut > 0 ? (
            <span className="text-small text-ink-3">{countOf(item.leftOut, 'other file')} left out</span>
          ) : null}
        </p>
        <div className="flex flex-wrap items-center gap-x-3">
          <ProgressThread
            stages={[{ beads: BEADS, filled: state === 'received' ? BEADS : filledBeads(share, BEADS) }]}
            tone={tone}
            label={`${name}: ${percentOf(item.sentBytes, item.bytes)} % sent`}
          />
          <span className="text-note tabular-nums text-ink-2">{uploadWords(item)}</span>
        </div>
        {item.message ? (
          <p role="alert" className={`text-note ${state === 'failed' ? 'text-red-text' : 'text-amber-text'}`}>
            {item.message}
          </p>
        ) : null}
        {state === 'received' && item.recordingId ? (
          <Outcome recordingId={item.recordingId} sha256={item.kind === 'file' ? item.sha256 : null} />
        ) : null}
      </div>
      <div className="flex gap-2">
        {state === 'sending' ? (
          <Button onClick={() => queue.pause(key)} aria-label={`Pause ${name}`}>
            Pause
          </Button>
        ) : null}
        {state === 'paused' ? (
          <Button kind="main" onClick={() => queue.resume(key)} aria-label={`Resume ${name}`}>
            Resume
          </Button>
        ) : null}
        {over ? (
          <Button kind="bare" onClick={() => queue.remove(key)} aria-label={`Take ${name} off the list`}>
            Take off
          </Button>
        ) : (
          <Button kind="bare" onClick={() => setAsking(true)} aria-label={`End ${name}`}>
            End
          </Button>
        )}
      </div>
      <ConfirmDialog
        open={asking}
        onClose={() => setAsking(false)}
        question={`End the upload of ${name}?`}
        keep={moving ? 'Keep sending' : 'Keep it'}
        act="End it"
        onAct={() => queue.end(key)}
      >
        What has arrived of it is thrown away. Your own file stays as it is.
      </ConfirmDialog>
    </li>
  );
}

/** What the check of a received stack says, and whether its bytes are those of the file. */
function Outcome({ recordingId, sha256 }: { recordingId: string; sha256: string | null }) {
  const { data } = useRecording(recordingId);
  if (!data) return null;
  const differs = sha256 !== null && data.sha256 !== null && data.sha256 !== sha256;
  return (
    <p className="text-note" aria-live="polite">
      {data.state === 'ready' ? (
        <>
          {countOf(data.frames ?? 0, 'frame')} of {data.width} × {data.height} px.{' '}
          <Link href={`/recordings/${recordingId}`}>Open the recording</Link>
        </>
      ) : data.state === 'refused' ? (
        <>
          <span className="font-strong text-red-text">{data.refusal?.detail}</span>{' '}
          <Link href={`/recordings/${recordingId}`}>See what can be done</Link>
        </>
      ) : (
        <span className="text-ink-2">
          The stack is being checked, {Math.floor(data.checkProgress * 100)} %.
        </span>
      )}
      {differs ? (
        <span className="block font-strong text-red-text">
          The checksum here is {sha256.slice(0, 8)}…, the server has {data.sha256?.slice(0, 8)}…. Send the
          file again.
        </span>
      ) : sha256 !== null && data.sha256 !== null ? (
        <span className="text-ink-2"> The checksums agree.</span>
      ) : null}
    </p>
  );
}
