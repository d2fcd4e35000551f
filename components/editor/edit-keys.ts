/** What the editor does for a key or a button. */
export type EditCommand =
  | { kind: 'split' | 'join' | 'remove' | 'add' | 'move' | 'undo' | 'redo' | 'mark-segment' }
  | { kind: 'trim-before' | 'trim-after' }
  | { kind: 'mark-line' | 'complete-frame' | 'point-back' }
  | {
      kind:
        'ghosts' | 'magnifier' | 'brightness' | 'find' | 'next' | 'previous' | 'first-frame' | 'last-frame';
    }
  | { kind: 'class'; population: 'trapped' | 'free' | 'undecided' }
  | { kind: 'place' | 'cancel' }
  | { kind: 'nudge'; dxPx: number; dyPx: number };

/** Words of the key list, in the order of the tool line. */
export const EDIT_KEYS: readonly { keys: string; does: string }[] = [
  { keys: '. ,', does: 'next and previous track by distance' },
  { keys: 'N', does: 'track by its number' },
  { keys: '< >', does: 'first and last frame of the track' },
  { keys: 'S', does: 'split before this frame' },
  { keys: 'J', does: 'join to another track' },
  { keys: '[ ]', does: 'cut off what is before or after this frame' },
  { keys: 'A', does: 'add a point' },
  { keys: 'M', does: 'move the point' },
  { keys: 'T F Y', does: 'class trapped, free, undecided' },
  { keys: 'G', does: 'begin a segment here, for the class' },
  { keys: 'Delete', does: 'remove the track' },
  { keys: 'K', does: 'mark a vortex line, and end it' },
  { keys: 'C', does: 'all lines of this frame are marked' },
  { keys: 'U, Ctrl Z', does: 'undo' },
  { keys: 'R, Ctrl Y', does: 'do again' },
  { keys: 'H', does: 'past and future places' },
  { keys: 'L', does: 'magnifier' },
  { keys: 'B', does: 'brightness linear or logarithmic' },
];

/** Words of the keys while a place is looked for. */
export const PLACE_KEYS: readonly { keys: string; does: string }[] = [
  { keys: '← ↑ → ↓', does: 'move by 1 px, with Shift by 0.1 px' },
  { keys: 'Enter', does: 'there' },
  { keys: 'Backspace', does: 'of a line: one point back' },
  { keys: 'Esc', does: 'leave it' },
];

interface KeyPress {
  key: string;
  shiftKey: boolean;
  ctrlKey: boolean;
  altKey: boolean;
  metaKey: boolean;
}

const ARROWS: Record<string, readonly [number, number]> = {
  ArrowLeft: [-1, 0],
  ArrowRight: [1, 0],
  ArrowUp: [0, -1],
  ArrowDown: [0, 1],
};
const FINE_PX = 0.1;

/**
 * The editor's command for a key press; null for keys that belong to the viewer or the browser.
 * @param placing while a place in the picture is looked for: arrows then move it.
 * @param drawing while that is the next point of a line.
 */
export function editCommandOf(press: KeyPress, placing: boolean, drawing = false): EditCommand | null {
  const { key, shiftKey } = press;
  if (press.altKey) return null;
  if (press.ctrlKey || press.metaKey) {
    const letter = key.toLowerCase();
    if (letter === 'z') return { kind: shiftKey ? 'redo' : 'undo' };
    return letter === 'y' ? { kind: 'redo' } : null;
  }
  if (placing) {
    const arrow = ARROWS[key];
    const step = shiftKey ? FINE_PX : 1;
    if (arrow) return { kind: 'nudge', dxPx: arrow[0] * step, dyPx: arrow[1] * step };
    if (key === 'Enter') return { kind: 'place' };
  }
  if (drawing && (key === 'Backspace' || key === 'Delete')) return { kind: 'point-back' };
  if (key === 'Escape') return { kind: 'cancel' };
  return plainKey(key);
}

function plainKey(key: string): EditCommand | null {
  switch (key.length === 1 ? key.toLowerCase() : key) {
    case '.':
      return { kind: 'next' };
    case ',':
      return { kind: 'previous' };
    case '<':
      return { kind: 'first-frame' };
    case '>':
      return { kind: 'last-frame' };
    case 'n':
      return { kind: 'find' };
    case 's':
      return { kind: 'split' };
    case 'j':
      return { kind: 'join' };
    case '[':
      return { kind: 'trim-before' };
    case ']':
      return { kind: 'trim-after' };
    case 'a':
      return { kind: 'add' };
    case 'm':
      return { kind: 'move' };
    case 't':
      return { kind: 'class', population: 'trapped' };
    case 'f':
      return { kind: 'class', population: 'free' };
    case 'y':
      return { kind: 'class', population: 'undecided' };
    case 'k':
      return { kind: 'mark-line' };
    case 'c':
      return { kind: 'complete-frame' };
    case 'g':
      return { kind: 'mark-segment' };
    case 'Delete':
    case 'Backspace':
      return { kind: 'remove' };
    case 'u':
      return { kind: 'undo' };
    case 'r':
      return { kind: 'redo' };
    case 'h':
      return { kind: 'ghosts' };
    case 'l':
      return { kind: 'magnifier' };
    case 'b':
      return { kind: 'brightness' };
    default:
      return null;
  }
}
