'use client';

import { useState } from 'react';
import { useChangeRecording, type RecordingChange } from '@/components/data/use-recording';
import { Button } from '@/components/ui/button';
import { SelectField } from '@/components/ui/choice';
import { ErrorState } from '@/components/ui/page-states';
import { countOf } from '@/lib/format/count';
import type { RecordingView } from '@/lib/views/recording-view';

interface RefusalPanelProps {
  recording: RecordingView;
  /** Why this person can't choose; null when they can. */
  editReason: string | null;
}

/** Why a stack can't be used as it is, and what can be used of it. */
export function RefusalPanel({ recording, editReason }: RefusalPanelProps) {
  const change = useChangeRecording(recording);
  const { refusal } = recording;
  if (!refusal) return null;
  const { usePages, channels } = refusal;
  const choose = (choice: RecordingChange) => change.mutate(choice);
  return (
    <div className="border-y border-line py-3">
      <ErrorState what="This stack can’t be used as it is.">{refusal.detail}</ErrorState>
      {editReason && (usePages || channels) ? (
        <p className="pt-2 text-note text-ink-2">{editReason}</p>
      ) : null}
      {!editReason && usePages ? (
        <div className="pt-3">
          <Button kind="main" busy={change.isPending} onClick={() => choose({ usePages })}>
            {`Use the ${countOf(usePages, 'intact frame')}`}
          </Button>
        </div>
      ) : null}
      {!editReason && channels ? (
        <ChannelChoice
          channels={channels}
          busy={change.isPending}
          onChoose={(channel) => choose({ channel })}
        />
      ) : null}
      {!usePages && !channels ? (
        <p className="pt-2 text-note text-ink-2">
          Send another file to the run; nothing of this one was kept.
        </p>
      ) : null}
      {change.isError ? (
        <div className="pt-2">
          <ErrorState live what="That was not saved.">
            {change.error.message}
          </ErrorState>
        </div>
      ) : null}
    </div>
  );
}

const COLOURS = ['red', 'green', 'blue'];

interface ChannelChoiceProps {
  channels: number;
  busy: boolean;
  onChoose: (channel: number | 'mean') => void;
}

function ChannelChoice({ channels, busy, onChoose }: ChannelChoiceProps) {
  const [channel, setChannel] = useState('mean');
  const name = (i: number) => (channels === 3 ? `channel ${i + 1} (${COLOURS[i]})` : `channel ${i + 1}`);
  return (
    <div className="flex flex-wrap items-end gap-2 pt-3">
      <SelectField
        label="Use"
        className="w-48"
        value={channel}
        onChange={(event) => setChannel(event.target.value)}
        options={[
          { value: 'mean', label: 'the mean of all' },
          ...Array.from({ length: channels }, (_, i) => ({ value: String(i), label: name(i) })),
        ]}
      />
      <Button kind="main" busy={busy} onClick={() => onChoose(channel === 'mean' ? 'mean' : Number(channel))}>
        Use it
      </Button>
    </div>
  );
}
