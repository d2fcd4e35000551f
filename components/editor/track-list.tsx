'use client';

import { useEffect, useRef, useState, type KeyboardEvent } from 'react';
import { trailAt, type TrackBlock } from '@/components/canvas/track-block';
import { useViewer } from '@/components/canvas/use-viewer';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import { StrokeSample } from '@/components/ui/strokes';
import { formatCount } from '@/lib/format/count';
import type { EditSession } from './edit-session';
import { isProvisional, trackName } from './log/gesture';
import { useEdit } from './use-edit';

const ROW_PX = 24;
const HEAD_PX = 24;
const VISIBLE_ROWS = 14;
/** Rows drawn beyond what is seen, so that a quick scroll shows no hole. */
const SPARE_ROWS = 6;
/** The list follows a scrub when it rests this long: nobody reads twenty lists a second. */
const REST_MS = 120;
const POPULATIONS = ['trapped', 'free', 'undecided'] as const;

interface ListRow {
  track: number;
  population: number;
  firstFrame: number;
  lastFrame: number;
  x: number;
  y: number;
  corrected: boolean;
}

interface TrackListProps {
  session: EditSession;
  viewer: ViewerStore;
  onChoose: (track: number) => void;
  /** The editor's keys work in the list too; true when the press was taken. */
  onKey: (event: KeyboardEvent) => boolean;
}

/** Tracks of the frame shown as text: what the picture shows, for reading, for keys and for screen readers. */
export function TrackList({ session, viewer, onChoose, onKey }: TrackListProps) {
  const rows = useFrameRows(session, viewer);
  const chosen = useViewer(viewer, (state) => state.chosenTrack);
  const box = useRef<HTMLDivElement>(null);
  const [scroll, setScroll] = useState(0);
  const at = rows.findIndex(({ track }) => track === chosen);
  const height = Math.min(VISIBLE_ROWS, Math.max(3, rows.length)) * ROW_PX;

  useEffect(() => {
    const element = box.current;
    if (!element || at < 0) return;
    const top = at * ROW_PX;
    if (top < element.scrollTop) element.scrollTop = top;
    if (top + ROW_PX > element.scrollTop + height) element.scrollTop = top + ROW_PX - height;
  }, [at, height]);

  const onKeyDown = (event: KeyboardEvent) => {
    const to = rowAfterKey(event.key, at, rows.length);
    if (to !== null && !event.shiftKey && !event.ctrlKey && session.state.get().tool.kind !== 'place') {
      event.preventDefault();
      if (rows[to]) onChoose(rows[to].track);
      return;
    }
    if (onKey(event)) event.preventDefault();
  };
  const first = Math.max(0, Math.floor(scroll / ROW_PX) - SPARE_ROWS);
  const drawn = new Set<number>();
  for (let i = first; i < Math.min(rows.length, first + VISIBLE_ROWS + 2 * SPARE_ROWS); i += 1) drawn.add(i);
  if (at >= 0) drawn.add(at);
  return (
    <div
      ref={box}
      role="grid"
      aria-label="Tracks in this frame"
      aria-rowcount={rows.length + 1}
      aria-activedescendant={at >= 0 ? rowId(rows[at].track) : undefined}
      tabIndex={0}
      onKeyDown={onKeyDown}
      onScroll={(event) => setScroll(event.currentTarget.scrollTop)}
      className="overflow-y-auto overflow-x-hidden text-note outline-offset-1"
      style={{ maxHeight: HEAD_PX + height }}
    >
      <div role="rowgroup" className="sticky top-0 z-10 bg-paper">
        <div
          role="row"
          aria-rowindex={1}
          className={`${COLUMNS} border-b border-ink text-small font-strong text-ink-2`}
          style={{ height: HEAD_PX }}
        >
          <span role="columnheader" className="pl-2">
            Track
          </span>
          <span role="columnheader">Class</span>
          <span role="columnheader" className="text-right">
            Frames
          </span>
          <span role="columnheader" className="pr-1 text-right">
            x, y <span className="font-text text-ink-3">px</span>
          </span>
        </div>
      </div>
      {rows.length === 0 ? (
        <div role="rowgroup">
          <div role="row" aria-rowindex={2}>
            <p role="gridcell" className="py-2 text-ink-2">
              No track of this kind is in the frame.
            </p>
          </div>
        </div>
      ) : (
        <div role="rowgroup" className="relative" style={{ height: rows.length * ROW_PX }}>
          {[...drawn]
            .sort((a, b) => a - b)
            .map((i) => (
              <TrackRow key={rows[i].track} row={rows[i]} index={i} chosen={i === at} onChoose={onChoose} />
            ))}
        </div>
      )}
    </div>
  );
}

const COLUMNS = 'grid grid-cols-[58px_minmax(0,1fr)_76px_68px] items-center gap-x-2';
const rowId = (track: number) => `track-row-${track}`;

function TrackRow({
  row,
  index,
  chosen,
  onChoose,
}: {
  row: ListRow;
  index: number;
  chosen: boolean;
  onChoose: (track: number) => void;
}) {
  const name = POPULATIONS[row.population];
  return (
    <div
      role="row"
      id={rowId(row.track)}
      aria-rowindex={index + 2}
      aria-selected={chosen}
      onClick={() => onChoose(row.track)}
      style={{ top: index * ROW_PX, height: ROW_PX }}
      className={`${COLUMNS} absolute inset-x-0 cursor-pointer border-b border-line tabular-nums ${chosen ? 'bg-violet-wash shadow-[inset_2px_0_0_var(--violet)]' : 'hover:bg-leaf'}`}
    >
      <span role="rowheader" className="truncate pl-2">
        {isProvisional(row.track) ? trackName(row.track).replace('track ', '') : formatCount(row.track)}
        {row.corrected ? (
          <>
            <span aria-hidden="true" className="text-ink-2">
              {' *'}
            </span>
            <span className="sr-only"> corrected</span>
          </>
        ) : null}
      </span>
      <span role="gridcell" className="flex min-w-0 items-center gap-2">
        {name ? <StrokeSample stroke={name} /> : null}
        <span className="truncate">{name ?? 'no class'}</span>
      </span>
      <span role="gridcell" className="text-right">
        {formatCount(row.firstFrame)}–{formatCount(row.lastFrame)}
      </span>
      <span role="gridcell" className="pr-1 text-right">
        {row.x.toFixed(0)}, {row.y.toFixed(0)}
      </span>
    </div>
  );
}

/** Rows of the frame shown, a little behind a scrub. */
function useFrameRows(session: EditSession, viewer: ViewerStore): ListRow[] {
  const version = useEdit(session.state, (state) => state.version);
  const filter = useEdit(session.state, (state) => state.filter);
  const [rows, setRows] = useState<ListRow[]>([]);
  useEffect(() => {
    let timer: ReturnType<typeof setTimeout> | undefined;
    let shown = -1;
    const read = () => setRows(rowsOf(session, viewer.get().shown));
    const follow = () => {
      if (viewer.get().shown === shown) return;
      shown = viewer.get().shown;
      clearTimeout(timer);
      timer = setTimeout(read, REST_MS);
    };
    shown = viewer.get().shown;
    read();
    const stop = viewer.subscribe(follow);
    return () => {
      stop();
      clearTimeout(timer);
    };
  }, [session, viewer, version, filter]);
  return rows;
}

function rowsOf(session: EditSession, frame: number): ListRow[] {
  const block: TrackBlock | null = session.block(frame);
  if (!block) return [];
  const rows: ListRow[] = [];
  const trail = { first: 0, last: 0 };
  for (let i = 0; i < block.count; i += 1) {
    if (!trailAt(block, i, frame, 1, trail)) continue;
    rows.push({
      track: block.track[i],
      population: block.population[i],
      firstFrame: block.firstFrame[i],
      lastFrame: block.lastFrame[i],
      x: block.x[trail.last],
      y: block.y[trail.last],
      corrected: session.isCorrected(block.track[i]),
    });
  }
  return rows.sort((a, b) => a.track - b.track);
}

/** The row that a key leads to; null for other keys. @param at the row now, -1 for none. */
export function rowAfterKey(key: string, at: number, count: number): number | null {
  if (count === 0) return null;
  const inside = (row: number) => Math.min(count - 1, Math.max(0, row));
  switch (key) {
    case 'ArrowDown':
      return inside(at + 1);
    case 'ArrowUp':
      return inside(at < 0 ? count - 1 : at - 1);
    case 'PageDown':
      return inside(at + VISIBLE_ROWS);
    case 'PageUp':
      return inside(at - VISIBLE_ROWS);
    case 'Home':
      return 0;
    case 'End':
      return count - 1;
    default:
      return null;
  }
}
