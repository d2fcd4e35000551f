'use client';

import { useMemo } from 'react';
import { TimeLine } from '@/components/ui/time-line';
import type { TimeLineEvent } from '@/components/ui/time-line-marks';
import { formatCount } from '@/lib/format/count';
import { thinSeries } from '@/lib/thin-series';
import { useViewer } from './use-viewer';
import type { ViewerStore } from './viewer-store';

/** Steps of the relief; more than this no eye can tell apart. */
const RELIEF_STEPS = 300;

/** `frame 8 412, 42.060 s`; without a time where the frame interval is not known. */
export function frameWords(frame: number, frameIntervalS: number | null): string {
  const time = frameIntervalS === null ? '' : `, ${(frame * frameIntervalS).toFixed(3)} s`;
  return `frame ${formatCount(frame)}${time}`;
}

interface ViewerTimeLineProps {
  store: ViewerStore;
  frameIntervalS: number | null;
  spotsPerFrame?: readonly number[];
  events?: readonly TimeLineEvent[];
}

/** The time line of a viewer: follows the frame without the rest of the page. */
export function ViewerTimeLine({ store, frameIntervalS, spotsPerFrame, events }: ViewerTimeLineProps) {
  const frame = useViewer(store, (state) => state.frame);
  const relief = useMemo(
    () => (spotsPerFrame && spotsPerFrame.length > 1 ? thinSeries(spotsPerFrame, RELIEF_STEPS) : undefined),
    [spotsPerFrame],
  );
  return (
    <div className="pt-[6px]">
      <TimeLine
        frames={store.frames}
        frame={frame}
        onFrame={(next) => store.goTo(next)}
        spotsPerFrame={relief}
        events={events}
        valueText={frameWords(frame, frameIntervalS)}
      />
    </div>
  );
}

/** The tag in the corner of the well. */
export function FrameTag({ store, frameIntervalS }: { store: ViewerStore; frameIntervalS: number | null }) {
  const frame = useViewer(store, (state) => state.frame);
  const late = useViewer(store, (state) => state.frame !== state.shown);
  const [first, ...rest] = frameWords(frame, frameIntervalS).split(', ');
  return (
    <p className="pointer-events-none absolute left-2 top-2 bg-well/72 px-[6px] py-px text-small tabular-nums text-well-text">
      {`${first} of ${formatCount(store.frames)}${rest.length > 0 ? `, ${rest.join(', ')}` : ''}`}
      {late ? <span className="loading-bars"> loading</span> : null}
    </p>
  );
}
