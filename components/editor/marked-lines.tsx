'use client';

import { useViewer } from '@/components/canvas/use-viewer';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import { Button } from '@/components/ui/button';
import { formatCount } from '@/lib/format/count';
import { markedLengthPx } from '@/tracking/corrections/marked-frames';
import type { EditCommand } from './edit-keys';
import type { EditSession } from './edit-session';
import { useEdit } from './use-edit';

interface MarkedLinesProps {
  session: EditSession;
  viewer: ViewerStore;
  /** Nothing can be changed. */
  locked: boolean;
  onCommand: (command: EditCommand) => void;
}

const linesText = (n: number) => (n === 0 ? 'no line' : n === 1 ? 'one line' : `${formatCount(n)} lines`);

/** Lines that people marked in the frame shown as text, and the frames that are complete. */
export function MarkedLines({ session, viewer, locked, onCommand }: MarkedLinesProps) {
  useEdit(session.state, (state) => state.version);
  const frame = useViewer(viewer, (state) => state.shown);
  const { marks } = session;
  const lines = marks.lines(frame);
  const complete = marks.completeBy(frame) !== null;
  const frames = marks.frames();
  return (
    <div className="text-note tabular-nums">
      <p>
        Frame {formatCount(frame)}: {linesText(lines.length)}
        {complete ? ', complete.' : frames.length > 0 ? ', not said to be complete.' : '.'}
      </p>
      <ul>
        {lines.map(({ points, key, by, stored }, i) => (
          <li
            key={`${key} ${i}`}
            className="flex items-center justify-between gap-2 border-b border-line py-[3px]"
          >
            <span>
              Line {i + 1}, {formatCount(Math.round(markedLengthPx(points)))} px
              {by === null ? '' : `, ${by}`}
            </span>
            {locked ? null : (
              <Button
                kind="bare"
                aria-label={`Remove marked line ${i + 1}`}
                onClick={() =>
                  session.takeBack({ key, stored }, `mark a line in frame ${formatCount(frame)}`)
                }
              >
                Remove
              </Button>
            )}
          </li>
        ))}
      </ul>
      {frames.length > 0 ? (
        <p className="flex flex-wrap items-baseline gap-x-2 gap-y-1 pt-2">
          <span className="text-ink-2">Frames with marks</span>
          {frames.map((one) => (
            <button
              key={one.frame}
              type="button"
              className="min-h-6 text-ink tabular-nums underline decoration-line-strong underline-offset-[3px] hover:decoration-ink"
              aria-label={`Frame ${one.frame}, ${linesText(one.lines)}, ${one.complete ? 'complete' : 'not complete'}`}
              onClick={() => viewer.goTo(one.frame)}
            >
              {formatCount(one.frame)}
              {one.complete ? ' ✓' : ''}
            </button>
          ))}
        </p>
      ) : null}
      {locked ? null : (
        <p className="pt-2">
          <Button aria-pressed={complete} onClick={() => onCommand({ kind: 'complete-frame' })}>
            {complete ? 'Frame is not complete' : 'All lines of this frame are marked'}
          </Button>
        </p>
      )}
      <p className="pt-2 text-small text-ink-2">
        Complete frames give a line density of their own. Mark every line from its first tracer to its last,
        in frames so far apart in time that other lines have come.
      </p>
    </div>
  );
}
