'use client';

import { useViewer } from '@/components/canvas/use-viewer';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import { Button } from '@/components/ui/button';
import type { EditCommand } from './edit-keys';
import type { EditStore } from './edit-state';
import type { LocalMarks } from './log/local-marks';
import { useEdit } from './use-edit';

interface ToolLineProps {
  state: EditStore;
  marks: LocalMarks;
  viewer: ViewerStore;
  /** Nothing can be changed: only what looks is shown. */
  readOnly: boolean;
  onCommand: (command: EditCommand) => void;
}

interface Word {
  label: string;
  cap: string;
  command: EditCommand;
  pressed?: boolean;
  /** Read instead of the label, where that is short. */
  says?: string;
  needsTrack?: boolean;
  off?: boolean;
}

/** Everything that can be done to tracks and lines, in words with their keys. */
export function ToolLine({ state, marks, viewer, readOnly, onCommand }: ToolLineProps) {
  const tool = useEdit(state, (s) => s.tool);
  const segment = useEdit(state, (s) => s.segmentFrom);
  const undo = useEdit(state, (s) => s.undoWords);
  const redo = useEdit(state, (s) => s.redoWords);
  const chosen = useViewer(viewer, (s) => s.chosenTrack !== null);
  const frame = useViewer(viewer, (s) => s.frame);
  useEdit(state, (s) => s.version);
  const complete = marks.completeBy(frame) !== null;
  const placing = tool.kind === 'place' ? tool.purpose : null;
  const groups: Word[][] = [
    [
      {
        label: 'Split',
        cap: 'S',
        command: { kind: 'split' },
        says: 'Split before this frame',
        needsTrack: true,
      },
      { label: 'Join', cap: 'J', command: { kind: 'join' }, pressed: tool.kind === 'join', needsTrack: true },
      { label: 'Cut before', cap: '[', command: { kind: 'trim-before' }, needsTrack: true },
      { label: 'Cut after', cap: ']', command: { kind: 'trim-after' }, needsTrack: true },
      {
        label: 'Remove',
        cap: 'Del',
        command: { kind: 'remove' },
        says: 'Remove the track',
        needsTrack: true,
      },
    ],
    [
      { label: 'Add point', cap: 'A', command: { kind: 'add' }, pressed: placing === 'add' },
      {
        label: 'Move point',
        cap: 'M',
        command: { kind: 'move' },
        pressed: placing === 'move',
        needsTrack: true,
      },
    ],
    [
      {
        label: segment === null ? 'Segment' : `Segment from ${segment}`,
        cap: 'G',
        command: { kind: 'mark-segment' },
        pressed: segment !== null,
        needsTrack: true,
      },
      { label: 'Trapped', cap: 'T', command: { kind: 'class', population: 'trapped' }, needsTrack: true },
      { label: 'Free', cap: 'F', command: { kind: 'class', population: 'free' }, needsTrack: true },
      { label: 'Undecided', cap: 'Y', command: { kind: 'class', population: 'undecided' }, needsTrack: true },
    ],
    [
      {
        label: tool.kind === 'line' ? 'End line' : 'Mark line',
        cap: 'K',
        command: { kind: 'mark-line' },
        says: tool.kind === 'line' ? 'End the line' : 'Mark a vortex line',
        pressed: tool.kind === 'line',
      },
      {
        label: 'Frame complete',
        cap: 'C',
        command: { kind: 'complete-frame' },
        says: 'All lines of this frame are marked',
        pressed: complete,
      },
    ],
    [
      {
        label: 'Undo',
        cap: 'U',
        command: { kind: 'undo' },
        says: undo ? `Undo: ${undo}` : 'Undo',
        off: !undo,
      },
      {
        label: 'Do again',
        cap: 'R',
        command: { kind: 'redo' },
        says: redo ? `Do again: ${redo}` : 'Do again',
        off: !redo,
      },
    ],
  ];
  if (readOnly) return null;
  return (
    <div
      role="toolbar"
      aria-label="Corrections"
      // On a narrow screen one row that is pushed along; keys mean nothing there.
      className="flex flex-wrap gap-x-4 gap-y-[6px] pb-[10px] print:hidden max-hand:flex-nowrap max-hand:overflow-x-auto max-hand:[&_kbd]:hidden"
    >
      {groups.map((words, index) => (
        <span key={index} className="flex flex-wrap gap-1 max-hand:shrink-0 max-hand:flex-nowrap">
          {words.map((word) => (
            <ToolWord
              key={word.cap}
              word={word}
              off={word.off || (word.needsTrack && !chosen)}
              onCommand={onCommand}
            />
          ))}
        </span>
      ))}
    </div>
  );
}

function ToolWord({
  word,
  off,
  onCommand,
}: {
  word: Word;
  off: boolean | undefined;
  onCommand: (command: EditCommand) => void;
}) {
  return (
    <Button
      keyCap={word.cap}
      aria-label={word.says ?? word.label}
      aria-keyshortcuts={word.cap === 'Del' ? 'Delete' : word.cap}
      aria-pressed={word.pressed}
      disabled={off}
      className={`px-[9px]! ${word.pressed ? 'bg-ink! text-paper!' : ''}`}
      // The picture or the list keeps the keyboard, so that the next key goes on with the work.
      onMouseDown={(event) => event.preventDefault()}
      onClick={() => onCommand(word.command)}
    >
      {word.label}
    </Button>
  );
}
