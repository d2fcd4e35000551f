/** What a key does in a well that has the focus. */
export type ViewerCommand =
  | { kind: 'step'; frames: number }
  | { kind: 'first' | 'last' | 'play' | 'fit' | 'clear' | 'next-track' | 'previous-track' }
  | { kind: 'zoom'; factor: number }
  | { kind: 'pan'; dx: number; dy: number };

const PAN_PX = 40;
const ZOOM = 1.3;
const MANY_FRAMES = 10;

/** Words of the key list shown under a well. */
export const VIEWER_KEYS: readonly { keys: string; does: string }[] = [
  { keys: '← →', does: 'one frame' },
  { keys: 'Page Up, Page Down', does: `${MANY_FRAMES} frames` },
  { keys: 'Home, End', does: 'first and last frame' },
  { keys: 'Space', does: 'play or pause' },
  { keys: '+ −', does: 'zoom' },
  { keys: 'Shift ← ↑ → ↓', does: 'move the picture' },
  { keys: '0', does: 'whole frame' },
  { keys: '. ,', does: 'next and previous track on screen' },
  { keys: 'Esc', does: 'let go of the track' },
];

interface KeyPress {
  key: string;
  shiftKey: boolean;
  ctrlKey: boolean;
  altKey: boolean;
  metaKey: boolean;
}

/** The command of a key press; null for keys that belong to the browser. */
export function commandOf(press: KeyPress): ViewerCommand | null {
  if (press.ctrlKey || press.altKey || press.metaKey) return null;
  if (press.shiftKey) {
    if (press.key === 'ArrowLeft') return { kind: 'pan', dx: PAN_PX, dy: 0 };
    if (press.key === 'ArrowRight') return { kind: 'pan', dx: -PAN_PX, dy: 0 };
    if (press.key === 'ArrowUp') return { kind: 'pan', dx: 0, dy: PAN_PX };
    if (press.key === 'ArrowDown') return { kind: 'pan', dx: 0, dy: -PAN_PX };
  }
  switch (press.key) {
    case 'ArrowRight':
      return { kind: 'step', frames: 1 };
    case 'ArrowLeft':
      return { kind: 'step', frames: -1 };
    case 'PageDown':
      return { kind: 'step', frames: MANY_FRAMES };
    case 'PageUp':
      return { kind: 'step', frames: -MANY_FRAMES };
    case 'Home':
      return { kind: 'first' };
    case 'End':
      return { kind: 'last' };
    case ' ':
      return { kind: 'play' };
    case '+':
    case '=':
      return { kind: 'zoom', factor: ZOOM };
    case '-':
    case '_':
      return { kind: 'zoom', factor: 1 / ZOOM };
    case '0':
      return { kind: 'fit' };
    case '.':
      return { kind: 'next-track' };
    case ',':
      return { kind: 'previous-track' };
    case 'Escape':
      return { kind: 'clear' };
    default:
      return null;
  }
}
