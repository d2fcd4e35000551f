import type { Correction } from '@/tracking/corrections/correction';
import { conflicts, type Foreign } from './conflicts';
import type { Gesture } from './gesture';
import type { StoredCorrection } from './stored-correction';

/** A correction in a few words, for lists and for what undo would do. */
export function wordsOf(correction: Correction): string {
  switch (correction.kind) {
    case 'split':
      return `split track ${correction.track} before frame ${correction.frame}`;
    case 'join':
      return `join tracks ${correction.track} and ${correction.with}`;
    case 'trim':
      return `trim track ${correction.track} to frames ${correction.from} to ${correction.to}`;
    case 'remove':
      return `remove track ${correction.track}`;
    case 'add-point':
      return correction.track === null
        ? `begin a track in frame ${correction.frame}`
        : `add a point to track ${correction.track} in frame ${correction.frame}`;
    case 'move-point':
      return `move the point of track ${correction.track} in frame ${correction.frame}`;
    case 'reclass': {
      const { from, to } = correction;
      const part =
        from === undefined && to === undefined ? '' : ` in frames ${from ?? 0} to ${to ?? 'the end'}`;
      return `class track ${correction.track} ${correction.population}${part}`;
    }
    case 'mark-line':
      return `mark a line in frame ${correction.frame}`;
    case 'complete-frame':
      return `call frame ${correction.frame} complete`;
    case 'undo':
      return 'undo';
  }
}

/** An undo takes hold of what the correction did that it takes back. */
export const holdOf = ({ correction, takenBack, made }: StoredCorrection): Foreign => ({
  correction: takenBack ?? correction,
  made,
});

/** Who did what that stands in the way of a gesture. */
export function conflictWords(theirs: readonly StoredCorrection[], mine: Gesture): string {
  const entry = theirs.find((other) => conflicts(mine.corrections, [holdOf(other)]));
  const who = entry?.by?.name ?? 'Someone else';
  if (!entry) return `${who} changed the same track meanwhile.`;
  const { correction, takenBack } = entry;
  const what = takenBack ? `${wordsOf(takenBack)}, taken back` : wordsOf(correction);
  return `${who} did something to the same place meanwhile: ${what}.`;
}
