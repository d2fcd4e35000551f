'use client';

import type { KeyboardEvent, PointerEvent } from 'react';
import { formatCount } from '@/lib/format/count';
import {
  frameTicks,
  frameToPx,
  pxToFrame,
  timeLineMarks,
  type TimeLineEvent,
  type TimeLineMark,
} from './time-line-marks';
import { useWidth } from './use-width';

interface TimeLineProps {
  frames: number;
  /** The frame shown now. */
  frame: number;
  onFrame: (frame: number) => void;
  /** Spots per frame, evenly spread over the recording; any length. Drawn as relief. */
  spotsPerFrame?: readonly number[];
  events?: readonly TimeLineEvent[];
  /** The frame in words, read out as the slider's value: "frame 8 412, 42.060 s". */
  valueText?: string;
}

const HEIGHT_PX = 58;
const THREAD_PX = 34;
const RELIEF_PX = 25;

/** Frames to move for a key; null for other keys. Shift takes ten times as many. */
export function frameStep(key: string, shift: boolean, frames: number): number | null {
  const many = shift ? 10 : 1;
  if (key === 'ArrowRight' || key === 'ArrowUp') return many;
  if (key === 'ArrowLeft' || key === 'ArrowDown') return -many;
  if (key === 'PageUp') return Math.max(1, Math.round(frames / 20));
  if (key === 'PageDown') return -Math.max(1, Math.round(frames / 20));
  if (key === 'Home') return -frames;
  if (key === 'End') return frames;
  return null;
}

/** When: a slider over the recording's frames, with spots per frame as relief and events as beads. */
export function TimeLine({ frames, frame, onFrame, spotsPerFrame, events = [], valueText }: TimeLineProps) {
  const [holder, widthPx] = useWidth<HTMLDivElement>(832);
  const x = (at: number) => frameToPx(at, frames, widthPx);
  const clamp = (at: number) => Math.max(0, Math.min(frames - 1, at));
  const seek = (event: PointerEvent<HTMLDivElement>) => {
    const box = event.currentTarget.getBoundingClientRect();
    onFrame(pxToFrame(event.clientX - box.left, frames, box.width));
  };
  const onKeyDown = (event: KeyboardEvent) => {
    const step = frameStep(event.key, event.shiftKey, frames);
    if (step === null) return;
    event.preventDefault();
    onFrame(clamp(frame + step));
  };
  const ticks = frameTicks(frames, widthPx < 500 ? 2 : 4);
  return (
    <div
      ref={holder}
      role="slider"
      tabIndex={0}
      aria-label="Frame"
      aria-valuemin={0}
      aria-valuemax={Math.max(0, frames - 1)}
      aria-valuenow={frame}
      aria-valuetext={valueText}
      onKeyDown={onKeyDown}
      onPointerDown={(event) => {
        event.currentTarget.setPointerCapture(event.pointerId);
        seek(event);
      }}
      onPointerMove={(event) => {
        if (event.currentTarget.hasPointerCapture(event.pointerId)) seek(event);
      }}
      className="touch-none cursor-pointer select-none"
    >
      <svg width="100%" height={HEIGHT_PX} aria-hidden="true" className="block overflow-visible">
        {spotsPerFrame ? <path d={reliefPath(spotsPerFrame, widthPx)} className="fill-band" /> : null}
        <path d={`M0 ${THREAD_PX}H${widthPx}`} className="stroke-ink-2" strokeWidth="1.5" />
        {ticks.map((tick) => (
          <g key={tick}>
            <path d={`M${x(tick)} ${THREAD_PX}v5`} className="stroke-ink-2" />
            {x(tick) < widthPx - 84 ? (
              <text
                x={x(tick)}
                y="54"
                textAnchor={tick === 0 ? 'start' : 'middle'}
                className="fill-ink-2 text-small"
              >
                {formatCount(tick)}
              </text>
            ) : null}
          </g>
        ))}
        <text x={widthPx} y="54" textAnchor="end" className="fill-ink-2 text-small">
          {`${formatCount(frames)} frames`}
        </text>
        {timeLineMarks(events, frames, widthPx).map((mark) => (
          <Mark key={mark.frame} mark={mark} />
        ))}
        <path d={`M${x(frame)} 2V${THREAD_PX - 8}`} className="stroke-ink" strokeWidth="1.5" />
        <circle cx={x(frame)} cy={THREAD_PX} r="8" className="fill-none stroke-ink" strokeWidth="1.5" />
      </svg>
    </div>
  );
}

function Mark({ mark }: { mark: TimeLineMark }) {
  const { xPx } = mark;
  const count =
    mark.count > 1 ? (
      <text x={xPx} y={THREAD_PX - 9} textAnchor="middle" className="fill-ink-2 text-tick">
        {mark.count}
      </text>
    ) : null;
  if (mark.kind === 'rejected') {
    return (
      <g>
        <path
          d={`M${xPx - 3} ${THREAD_PX - 3}l6 6M${xPx + 3} ${THREAD_PX - 3}l-6 6`}
          className="stroke-ink-2"
          strokeWidth="1.5"
        />
        {count}
      </g>
    );
  }
  const confirmed = mark.kind === 'confirmed';
  return (
    <g>
      <circle
        cx={xPx}
        cy={THREAD_PX}
        r={confirmed ? 4.6 : 4}
        strokeWidth={confirmed ? 1 : 1.5}
        className={confirmed ? 'fill-event stroke-paper' : 'fill-paper stroke-event'}
      />
      {count}
    </g>
  );
}

/** Area of the counts over the thread; the largest count reaches its full height. */
function reliefPath(counts: readonly number[], widthPx: number): string {
  const top = Math.max(1, ...counts);
  const stepPx = widthPx / Math.max(1, counts.length - 1);
  const points = counts.map(
    (count, index) =>
      `L${(index * stepPx).toFixed(1)} ${(RELIEF_PX - (count / top) * (RELIEF_PX - 3)).toFixed(1)}`,
  );
  return `M0 ${RELIEF_PX}${points.join('')}L${widthPx} ${RELIEF_PX}Z`;
}
