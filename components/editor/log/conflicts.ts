import type { Correction } from '@/tracking/corrections/correction';
import { tracksNamed, type EditCorrection } from './gesture';

/** What a correction takes hold of on one track: frames `from` to `to`, and whether of its shape or its class. */
interface Hold {
  track: number;
  from: number;
  to: number;
  of: 'shape' | 'class' | 'all';
}

const EVER = { from: 0, to: Infinity };

function holdsOf(correction: EditCorrection | Correction, made: number | null): Hold[] {
  switch (correction.kind) {
    // Nobody's marks stand in the way of another's.
    case 'mark-line':
    case 'complete-frame':
    case 'undo':
      return [];
    case 'split': {
      const { track, frame } = correction;
      const holds: Hold[] = [{ track, from: frame - 1, to: frame, of: 'shape' }];
      return made === null ? holds : [...holds, { track: made, ...EVER, of: 'all' }];
    }
    case 'join':
      return [
        { track: correction.track, ...EVER, of: 'all' },
        { track: correction.with, ...EVER, of: 'all' },
      ];
    case 'trim': {
      const { track, from, to } = correction;
      return [
        { track, from: 0, to: from - 1, of: 'shape' },
        { track, from: to + 1, to: Infinity, of: 'shape' },
      ];
    }
    case 'remove':
      return [{ track: correction.track, ...EVER, of: 'all' }];
    case 'add-point':
    case 'move-point': {
      const { track, frame } = correction;
      return track === null ? [] : [{ track, from: frame, to: frame, of: 'shape' }];
    }
    case 'reclass': {
      const { track, from = 0, to = Infinity } = correction;
      return [{ track, from, to, of: 'class' }];
    }
  }
}

/** A correction of someone else, as far as it matters here. */
export interface Foreign {
  correction: Correction;
  /** Number of the track that it made. */
  made: number | null;
}

/**
 * Whether corrections that were made on an older state take hold of what someone else has changed
 * since: the same frames of the same track, both of its shape or both of its class. Those are not
 * made again without asking, or one person would undo the other unseen.
 *
 * A split takes the frames behind it away from its track, so a change there meets it too.
 */
export function conflicts(mine: readonly EditCorrection[], theirs: readonly Foreign[]): boolean {
  const named = new Set(tracksNamed(mine));
  const holds = mine.flatMap((correction) => holdsOf(correction, null));
  for (const { correction, made } of theirs) {
    for (const other of holdsOf(correction, made)) {
      if (!named.has(other.track)) continue;
      const away = correction.kind === 'split' ? { ...other, to: Infinity, of: 'all' as const } : other;
      if (holds.some((hold) => meet(hold, away))) return true;
    }
  }
  return false;
}

const meet = (a: Hold, b: Hold): boolean =>
  a.track === b.track &&
  a.from <= b.to &&
  b.from <= a.to &&
  (a.of === b.of || a.of === 'all' || b.of === 'all');
