'use client';

import { Button } from '@/components/ui/button';
import { Segment } from '@/components/ui/choice';
import { Fold } from '@/components/ui/fold';
import { useViewer } from './use-viewer';
import { VIEWER_KEYS } from './viewer-keys';
import type { ViewerStore } from './viewer-store';

interface ViewerControlsProps {
  store: ViewerStore;
  player: { toggle: () => void; pacePerS: number; setPacePerS: (pace: number) => void; still: boolean };
  onZoom: (factor: number) => void;
  onFit: () => void;
  keysId: string;
}

const PACES = ['5', '10', '20'] as const;

/** Everything the keys do, for the pointer. */
export function ViewerControls({ store, player, onZoom, onFit, keysId }: ViewerControlsProps) {
  const playing = useViewer(store, (state) => state.playing);
  return (
    <div className="flex flex-wrap items-center gap-2 pt-1 print:hidden">
      <Button onClick={() => store.step(-1)} aria-label="One frame back">
        −1
      </Button>
      {player.still ? null : (
        <Button onClick={player.toggle} className="min-w-[66px]">
          {playing ? 'Pause' : 'Play'}
        </Button>
      )}
      <Button onClick={() => store.step(1)} aria-label="One frame on">
        +1
      </Button>
      {player.still ? null : (
        <Segment
          label="Frames per second"
          options={PACES.map((pace) => ({ value: pace, label: `${pace}/s` }))}
          value={String(player.pacePerS)}
          onChange={(pace) => player.setPacePerS(Number(pace))}
        />
      )}
      <span className="ml-auto flex gap-2">
        <Button onClick={() => onZoom(1 / 1.5)} aria-label="Zoom out">
          −
        </Button>
        <Button onClick={() => onZoom(1.5)} aria-label="Zoom in">
          +
        </Button>
        <Button onClick={onFit}>Whole frame</Button>
      </span>
      <Fold title="Keys in the frame" className="basis-full">
        <dl id={keysId} className="flex flex-wrap gap-x-5 gap-y-1 pb-1 text-small text-ink-2">
          {VIEWER_KEYS.map(({ keys, does }) => (
            <div key={keys} className="flex gap-[6px]">
              <dt className="text-ink">{keys}</dt>
              <dd>{does}</dd>
            </div>
          ))}
        </dl>
      </Fold>
    </div>
  );
}
