'use client';

import type { KeyboardEvent, PointerEvent } from 'react';
import { Button } from '@/components/ui/button';
import { useWidth } from '@/components/ui/use-width';
import { formatCount } from '@/lib/format/count';
import { contrastStep, moveBead, type CountRange } from './contrast';
import { useHistogram } from './use-histogram';
import { useViewer } from './use-viewer';
import type { ViewerStore } from './viewer-store';

const HILL_PX = 34;
const THREAD_Y_PX = 42;
const HEIGHT_PX = 54;
/** Beads stand this far from the ends, so that they can be taken hold of. */
const EDGE_PX = 9;

const countText = (count: number) =>
  Math.abs(count) >= 20 || Number.isInteger(count)
    ? formatCount(count)
    : String(Number(count.toPrecision(3)));

interface ContrastThreadProps {
  store: ViewerStore;
  recordingId: string;
  imageWidth: number;
  range: CountRange;
  /** The contrast that the recording opens with. */
  initial: { low: number; high: number };
}

/** Contrast as two beads on a thread under the hill of counts: left of the first is black, right of the second white. */
export function ContrastThread({ store, recordingId, imageWidth, range, initial }: ContrastThreadProps) {
  const low = useViewer(store, (state) => state.low);
  const high = useViewer(store, (state) => state.high);
  const [holder, widthPx] = useWidth<HTMLDivElement>(260);
  const histogram = useHistogram(recordingId, Math.floor(store.frames / 2), imageWidth, range);
  const x = (count: number) =>
    EDGE_PX + ((count - range.least) / (range.most - range.least)) * (widthPx - 2 * EDGE_PX);
  const move = (bead: 'low' | 'high', value: number) => store.set(moveBead(bead, value, store.get(), range));

  const dragTo = (bead: 'low' | 'high') => (event: PointerEvent<SVGGElement>) => {
    if (!event.currentTarget.hasPointerCapture(event.pointerId)) return;
    const box = holder.current!.getBoundingClientRect();
    const share = (event.clientX - box.left - EDGE_PX) / (box.width - 2 * EDGE_PX);
    move(bead, range.least + share * (range.most - range.least));
  };
  const onKey = (bead: 'low' | 'high') => (event: KeyboardEvent) => {
    const step = contrastStep(range) * (event.shiftKey ? 10 : 1);
    const by = { ArrowRight: step, ArrowUp: step, ArrowLeft: -step, ArrowDown: -step }[event.key];
    if (by === undefined) return;
    event.preventDefault();
    move(bead, store.get()[bead] + by);
  };
  const bead = (name: 'low' | 'high', value: number) => (
    <g
      role="slider"
      tabIndex={0}
      aria-label={name === 'low' ? 'Counts drawn black' : 'Counts drawn white'}
      aria-valuemin={Math.round(range.least)}
      aria-valuemax={Math.round(range.most)}
      aria-valuenow={Math.round(value)}
      aria-valuetext={`${countText(value)} counts`}
      onKeyDown={onKey(name)}
      onPointerDown={(event) => event.currentTarget.setPointerCapture(event.pointerId)}
      onPointerMove={dragTo(name)}
      className="cursor-ew-resize touch-none"
    >
      <rect x={x(value) - 12} y={THREAD_Y_PX - 12} width="24" height="24" fill="transparent" />
      <circle
        cx={x(value)}
        cy={THREAD_Y_PX}
        r="6"
        strokeWidth="2"
        className={`stroke-ink ${name === 'low' ? 'fill-ink' : 'fill-paper'}`}
      />
    </g>
  );

  return (
    <div className="flex min-w-0 flex-wrap items-end gap-x-4 gap-y-1">
      <div ref={holder} className="min-w-[180px] max-w-[480px] flex-1">
        <svg
          width="100%"
          height={HEIGHT_PX}
          className="block overflow-visible"
          role="group"
          aria-label="Contrast"
        >
          <path d={hillPath(histogram.data ?? [], widthPx)} className="fill-band" aria-hidden="true" />
          <path d={`M0 ${THREAD_Y_PX}H${widthPx}`} className="stroke-line-strong" aria-hidden="true" />
          <path
            d={`M${x(low)} ${THREAD_Y_PX}H${x(high)}`}
            className="stroke-ink"
            strokeWidth="1.5"
            aria-hidden="true"
          />
          {bead('low', low)}
          {bead('high', high)}
        </svg>
      </div>
      <p className="pb-1 text-small tabular-nums text-ink-2">
        black at {countText(low)}, white at {countText(high)} counts
      </p>
      {low !== initial.low || high !== initial.high ? (
        <Button kind="bare" onClick={() => store.set(initial)}>
          As measured
        </Button>
      ) : null}
    </div>
  );
}

/** Heights follow the square root: a few bright spots must show beside a sea of background. */
function hillPath(bins: readonly number[], widthPx: number): string {
  if (bins.length === 0) return '';
  const top = Math.sqrt(Math.max(1, ...bins));
  const step = (widthPx - 2 * EDGE_PX) / bins.length;
  const points = bins.map((count, i) => {
    const y = HILL_PX - (Math.sqrt(count) / top) * (HILL_PX - 2);
    return `L${(EDGE_PX + (i + 0.5) * step).toFixed(1)} ${y.toFixed(1)}`;
  });
  return `M${EDGE_PX} ${HILL_PX}${points.join('')}L${widthPx - EDGE_PX} ${HILL_PX}Z`;
}
