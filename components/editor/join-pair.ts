import type { Point } from '@/components/canvas/view-box';
import * as acts from './edit-actions';
import { framesText, type EditContext } from './edit-context';
import { PICK } from './edit-state';
import { joinCandidates, type JoinCandidate } from './join-candidates';
import { trackName } from './log/gesture';

/** Joining two tracks: the first is chosen, the second is offered, walked to or pointed at. */
export class JoinPair {
  constructor(private readonly context: EditContext) {}

  begin(first: number): void {
    const { session } = this.context;
    if (session.locked !== null) return session.state.say(session.locked, 'refusal');
    session.state.set({ tool: { kind: 'join', first, second: null } });
    const [nearest] = this.candidates();
    session.state.set({ tool: { kind: 'join', first, second: nearest?.track ?? null } });
    session.state.say(
      nearest
        ? `Join ${trackName(first)}: the nearest end is that of ${trackName(nearest.track)}, ${nearest.distancePx.toFixed(1)} px and ${framesText(nearest.gapFrames)} away. Enter joins, the full stop key goes on to the next.`
        : `Nothing ends or begins near ${trackName(first)} in these frames. Click on a track, or enter its number.`,
    );
  }

  join(first: number, second: number): void {
    const { session, viewer } = this.context;
    const one = session.track(first);
    const other = session.track(second);
    const gesture = session.act(acts.joinTracks(first, second));
    if (!gesture) return;
    session.state.set({ tool: PICK });
    // The one that begins first keeps its number.
    if (one && other && other.points.frame[0] < one.points.frame[0]) viewer.set({ chosenTrack: second });
  }

  /** Tracks that the first of a pair could be joined with. */
  candidates(): JoinCandidate[] {
    const { session, viewer } = this.context;
    const { tool } = session.state.get();
    if (tool.kind !== 'join') return [];
    const block = session.block(viewer.get().shown, false);
    const first = session.track(tool.first);
    return block && first ? joinCandidates(block, first) : [];
  }

  /** The track of a possible second one whose stroke is nearest to a place. */
  candidateAt(place: Point, reachPx: number): number | null {
    const { session, viewer } = this.context;
    const block = session.block(viewer.get().shown, false);
    if (!block) return null;
    let best: number | null = null;
    let bestPx = reachPx;
    for (const { index, track } of this.candidates()) {
      for (let k = block.start[index]; k < block.start[index + 1]; k += 1) {
        const px = Math.hypot(block.x[k] - place.x, block.y[k] - place.y);
        if (px < bestPx) [best, bestPx] = [track, px];
      }
    }
    return best;
  }
}
