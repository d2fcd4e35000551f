import { isMark, type Mark, type PlacePx } from '@/tracking/corrections/correction';
import type { EditCorrection } from './gesture';

/** A mark that the server has stored and that is in force. */
export interface StoredMark {
  mark: Mark;
  /** Of its correction, to take it back. */
  id: string;
  gesture: string | null;
  by: { id: string; name: string } | null;
}

/** Marks of the server at a revision. */
export interface MarksAnswer {
  revision: number;
  marks: readonly StoredMark[];
}

/** A marked line as it is shown: `stored` is null while the server has not stored it. */
export interface ShownLine {
  points: readonly PlacePx[];
  stored: { id: string } | null;
  /** Of the gesture or correction that drew it: names it in lists. */
  key: string;
  by: string | null;
}

/** What a gesture of this visit did to marks. */
interface MarkStep {
  gesture: string;
  made: readonly Mark[];
  /** The gesture, or the correction, that it takes back. */
  takesBack: string | null;
  /** Revision at which the server stored it; null while it has not. */
  revision: number | null;
}

/** Marks as this person sees them: those of the server, and over them what was done here and is not in them yet. */
export class LocalMarks {
  private answer: MarksAnswer = { revision: -1, marks: [] };
  private steps: MarkStep[] = [];

  /** Takes in the marks of the server; what they have in them is needed no more. */
  renew(answer: MarksAnswer): void {
    if (answer.revision < this.answer.revision) return;
    this.answer = answer;
    this.steps = this.steps.filter(({ revision }) => revision === null || revision > answer.revision);
  }

  apply(gesture: string, corrections: readonly EditCorrection[]): void {
    const made = corrections.filter(isMark);
    const [first] = corrections;
    const takesBack = first?.kind === 'undo' ? ('ofGesture' in first ? first.ofGesture : first.of) : null;
    if (made.length > 0 || takesBack !== null) {
      this.steps.push({ gesture, made, takesBack, revision: null });
    }
  }

  drop(gesture: string): void {
    this.steps = this.steps.filter((step) => step.gesture !== gesture);
  }

  stored(gesture: string, revision: number): void {
    for (const step of this.steps) if (step.gesture === gesture) step.revision = revision;
  }

  /** Whether something that is stored is not in the marks of the server that are here. */
  get old(): boolean {
    return this.steps.some(({ revision }) => revision !== null);
  }

  lines(frame: number): ShownLine[] {
    const gone = this.takenBack();
    const lines: ShownLine[] = [];
    for (const { mark, id, gesture, by } of this.answer.marks) {
      if (mark.kind !== 'mark-line' || mark.frame !== frame || isGone(gone, id, gesture)) continue;
      lines.push({ points: mark.points, stored: { id }, key: gesture ?? id, by: by?.name ?? null });
    }
    for (const { gesture, made } of this.steps) {
      if (gone.has(gesture)) continue;
      for (const mark of made) {
        if (mark.kind !== 'mark-line' || mark.frame !== frame) continue;
        lines.push({ points: mark.points, stored: null, key: gesture, by: null });
      }
    }
    return lines;
  }

  /** What says that the frame is complete: a gesture or correction to be taken back; null where nothing does. */
  completeBy(frame: number): { key: string; stored: { id: string } | null } | null {
    const gone = this.takenBack();
    for (const { mark, id, gesture } of this.answer.marks) {
      if (mark.kind !== 'complete-frame' || mark.frame !== frame || isGone(gone, id, gesture)) continue;
      return { key: gesture ?? id, stored: { id } };
    }
    const own = this.steps.find(
      ({ gesture, made }) =>
        !gone.has(gesture) && made.some((mark) => mark.kind === 'complete-frame' && mark.frame === frame),
    );
    return own ? { key: own.gesture, stored: null } : null;
  }

  /** Frames with marks, in order. */
  frames(): { frame: number; lines: number; complete: boolean }[] {
    const all = [
      ...this.answer.marks.map(({ mark }) => mark.frame),
      ...this.steps.flatMap(({ made }) => made.map(({ frame }) => frame)),
    ];
    return [...new Set(all)]
      .sort((a, b) => a - b)
      .map((frame) => ({
        frame,
        lines: this.lines(frame).length,
        complete: this.completeBy(frame) !== null,
      }))
      .filter(({ lines, complete }) => lines > 0 || complete);
  }

  /** Gestures and corrections that steps here take back; what takes back can be taken back itself. */
  private takenBack(): ReadonlySet<string> {
    const gone = new Set<string>();
    for (let i = this.steps.length - 1; i >= 0; i -= 1) {
      const { gesture, takesBack } = this.steps[i];
      if (takesBack !== null && !gone.has(gesture)) gone.add(takesBack);
    }
    return gone;
  }
}

const isGone = (gone: ReadonlySet<string>, id: string, gesture: string | null): boolean =>
  gone.has(id) || (gesture !== null && gone.has(gesture));
