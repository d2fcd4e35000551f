import { describe, expect, it } from 'vitest';
import { appendCorrection, applyCorrections, rawTracks } from '@/tracking/corrections/apply-corrections';
import { carryCorrections } from '@/tracking/corrections/carry-corrections';
import type { Correction, LoggedCorrection } from '@/tracking/corrections/correction';
import { asEdited } from '@/tracking/corrections/edited-track';
import { inForce } from '@/tracking/corrections/in-force';
import { markedFrames, markedLengthPx } from '@/tracking/corrections/marked-frames';
import { trackSlice } from '@/tracking/track-slice';
import { EXTENT, madeTracks } from './made-tracks';

const raw = madeTracks([[0, 1, 2, 3, 4, 5]]);
const source = rawTracks(raw);

function log(...corrections: Correction[]): LoggedCorrection[] {
  const entries: LoggedCorrection[] = [];
  for (const correction of corrections) {
    const entry = { ...correction, id: `c${entries.length + 1}` };
    appendCorrection(source, entries, entry, EXTENT);
    entries.push(entry);
  }
  return entries;
}
const line = (frame: number, x = 0): Correction => ({
  kind: 'mark-line',
  frame,
  points: [
    [x, 0],
    [x + 3, 4],
    [x + 3, 10],
  ],
});
const frames = (entries: LoggedCorrection[]) => markedFrames(entries, inForce(entries));

describe('marks of lines', () => {
  it('leave the tracks and their numbers as they are', () => {
    const entries = log(line(2), { kind: 'complete-frame', frame: 2 }, line(3));
    const after = applyCorrections(source, entries, EXTENT);
    expect(after.changed.size).toBe(0);
    expect(after.nextNumber).toBe(1);
  });

  it('are gathered by frame, with those taken back left out', () => {
    const entries = log(
      line(4),
      line(2),
      { kind: 'complete-frame', frame: 2 },
      line(2, 10),
      { kind: 'undo', of: 'c2' },
      { kind: 'complete-frame', frame: 7 },
    );
    const found = frames(entries);
    expect(found.map(({ frame, lines, complete }) => [frame, lines.length, complete])).toEqual([
      [2, 1, true],
      [4, 1, false],
      [7, 0, true],
    ]);
    expect(found[0].lines[0][0]).toEqual([10, 0]);
    expect(markedLengthPx(found[0].lines[0])).toBe(11);
    const back = [...entries, { kind: 'undo', of: 'c3', id: 'c7' } as LoggedCorrection];
    expect(frames(back).find(({ frame }) => frame === 2)?.complete).toBe(false);
  });

  it.each([
    [{ ...line(EXTENT.frames) }, /The recording has frames 0 to/, 'frame'],
    [line(0, EXTENT.width), /Point 1 of the line lies outside/, 'points.0'],
    [{ kind: 'mark-line', frame: 0, points: [[1, 1], [1, 1.5]] }, /at least 1 px long/, 'points'], // prettier-ignore
    [{ kind: 'complete-frame', frame: EXTENT.frames }, /The recording has frames 0 to/, 'frame'],
  ] as [Correction, RegExp, string][])(
    'are refused outside the recording or without length: %j',
    (correction, says, path) => {
      expect(() => log(correction)).toThrow(says);
      try {
        log(correction);
      } catch (refusal) {
        expect(refusal).toMatchObject({ path });
      }
    },
  );

  it('are carried to another analysis as they are', () => {
    const entries = log(line(2), line(3), { kind: 'undo', of: 'c2' }, { kind: 'complete-frame', frame: 2 });
    const here = { tracks: [{ ...asEdited(trackSlice(raw, 0)), track: 9 }], nextNumber: 10 };
    const { changes, outcomes } = carryCorrections({ raw: source, log: entries }, here, EXTENT);
    expect(changes.map(({ change, of }) => [change.kind, of])).toEqual([
      ['mark-line', 0],
      ['complete-frame', 3],
    ]);
    expect(outcomes.map(({ outcome }) => outcome)).toEqual(['carried', 'carried']);
  });
});
