'use client';

import { useState } from 'react';
import { Button } from '@/components/ui/button';
import { SelectField } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import type { EditStore } from './edit-state';
import { EVERY_TRACK, FLAG_WORDS, isEveryTrack, type FlagName, type TrackFilter } from './track-filter';
import { useEdit } from './use-edit';

const POPULATIONS: TrackFilter['population'][] = ['all', 'trapped', 'free', 'undecided'];

/** Which tracks are shown in the picture and in the list. */
export function FilterFields({ state }: { state: EditStore }) {
  const filter = useEdit(state, (s) => s.filter);
  const change = (part: Partial<TrackFilter>) =>
    state.set({ filter: { ...filter, ...part }, version: state.get().version + 1 });
  return (
    <fieldset className="grid min-w-0 grid-cols-2 gap-x-3 gap-y-2 pb-3">
      <legend className="sr-only">Tracks that are shown</legend>
      <SelectField
        label="Class"
        value={filter.population}
        options={POPULATIONS.map((value) => ({ value, label: value }))}
        onChange={(event) => change({ population: event.target.value as TrackFilter['population'] })}
      />
      <SelectField
        label="With a point"
        value={filter.flag}
        options={Object.entries(FLAG_WORDS).map(([value, label]) => ({ value, label }))}
        onChange={(event) => change({ flag: event.target.value as FlagName })}
      />
      <FramesField
        label="At least"
        value={filter.leastFrames}
        onValue={(leastFrames) => change({ leastFrames })}
      />
      <FramesField
        label="At most"
        value={filter.mostFrames}
        onValue={(mostFrames) => change({ mostFrames })}
      />
      {isEveryTrack(filter) ? null : (
        <Button className="col-span-2" onClick={() => change(EVERY_TRACK)}>
          Show all tracks
        </Button>
      )}
    </fieldset>
  );
}

function FramesField({
  label,
  value,
  onValue,
}: {
  label: string;
  value: number | null;
  onValue: (frames: number | null) => void;
}) {
  const [typed, setTyped] = useState('');
  const frames = Number(typed);
  const wrong = typed !== '' && !(Number.isInteger(frames) && frames > 0);
  return (
    <Field
      label={label}
      unit="frames"
      inputMode="numeric"
      // Set back from outside: what was typed goes too.
      value={value === null && !wrong ? '' : typed}
      error={wrong ? 'A whole number above 0.' : undefined}
      onChange={(event) => {
        const text = event.target.value.trim();
        setTyped(text);
        const next = Number(text);
        onValue(text !== '' && Number.isInteger(next) && next > 0 ? next : null);
      }}
    />
  );
}
