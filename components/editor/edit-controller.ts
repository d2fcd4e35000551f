import { createTrackPicker, type TrackPicker } from '@/components/canvas/pick-track';
import type { TrackBlock } from '@/components/canvas/track-block';
import { TRAIL_FRAMES } from '@/components/canvas/track-blocks';
import type { Grip } from '@/components/canvas/use-well-gestures';
import type { Point } from '@/components/canvas/view-box';
import { formatCount } from '@/lib/format/count';
import * as acts from './edit-actions';
import { upper, type EditContext } from './edit-context';
import type { EditCommand } from './edit-keys';
import { PICK } from './edit-state';
import type { JoinCandidate } from './join-candidates';
import { JoinPair } from './join-pair';
import { MarkLines } from './mark-lines';
import { trackName } from './log/gesture';
import { PlacePoint } from './place-point';
import { Sight } from './sight';
import { TrackWalk } from './track-walk';

/** What keys, buttons and the pointer do: everything that can be done can be done by each of them. */
export class EditController {
  private readonly walk = new TrackWalk();
  private picked: { block: TrackBlock; frame: number; picker: TrackPicker } | null = null;
  private hover: Point | null = null;

  private readonly sight: Sight;
  private readonly pair: JoinPair;
  private readonly placing: PlacePoint;
  private readonly marking: MarkLines;

  constructor(private readonly context: EditContext) {
    this.sight = new Sight(context);
    this.pair = new JoinPair(context);
    this.placing = new PlacePoint(context);
    this.marking = new MarkLines(context);
  }

  /** Where the pointer is, px of the image; null when it has left. */
  point(place: Point | null): void {
    this.hover = place;
  }

  /** What the magnifier looks at. */
  get focus(): Point | null {
    const { tool } = this.context.session.state.get();
    if (tool.kind === 'line') return this.hover ?? tool.at;
    return tool.kind === 'place' ? tool.at : this.hover;
  }

  run(command: EditCommand): void {
    const { session } = this.context;
    switch (command.kind) {
      case 'next':
      case 'previous':
        return this.step(command.kind === 'next' ? 1 : -1);
      case 'undo':
        return session.undo();
      case 'redo':
        return session.redo();
      case 'ghosts':
        return this.sight.toggle('ghosts', 'Past and future places');
      case 'magnifier':
        return this.sight.toggle('magnifier', 'Magnifier');
      case 'brightness':
        return this.sight.turnBrightness();
      case 'find':
        return this.context.onFind();
      case 'add':
        return this.placing.begin('add', this.cross());
      case 'mark-line':
        return this.marking.turn(this.cross());
      case 'complete-frame':
        return this.marking.turnComplete();
      case 'point-back': {
        const { tool } = session.state.get();
        if (tool.kind === 'line') this.marking.back(tool);
        return;
      }
      case 'nudge':
        // From here on the cross leads, until the pointer moves again.
        this.hover = null;
        return this.placing.nudge(command.dxPx, command.dyPx);
      case 'place':
        return this.confirm();
      case 'cancel':
        return this.cancel();
      default:
        return this.onTrack(command);
    }
  }

  /** A press while a point is moved: dragging carries the cross along. */
  grab(place: Point, reachPx: number): Grip | null {
    return this.placing.grab(place, reachPx);
  }

  /** Tracks that the first of a pair could be joined with. */
  candidates(): JoinCandidate[] {
    return this.pair.candidates();
  }

  /** Brings a track into sight once its frame is there. */
  bringWhenShown(track: number): void {
    this.sight.bringWhenShown(track);
  }

  /** Where a cross begins when no track tells. */
  private cross(): Point {
    return this.hover ?? this.sight.middle();
  }

  /** A click into the picture. */
  pick(place: Point, reachPx: number): void {
    const { session } = this.context;
    const { tool } = session.state.get();
    if (tool.kind === 'place') {
      void this.placing.put(tool, place);
      return;
    }
    if (tool.kind === 'line') return this.marking.put(tool, place, reachPx);
    if (tool.kind === 'join') {
      const second = this.pair.candidateAt(place, reachPx * 1.5) ?? this.trackAt(place, reachPx);
      if (second !== null && second !== tool.first) this.pair.join(tool.first, second);
      return;
    }
    this.choose(this.trackAt(place, reachPx));
  }

  /** Chooses a track by any means and says what it is. */
  choose(track: number | null, bring = false): void {
    const { session, viewer } = this.context;
    viewer.set({ chosenTrack: track, chosenEvent: null });
    if (bring && track !== null) this.sight.bringWhenShown(track);
    session.state.set({ segmentFrom: null });
    if (track !== null) session.state.say(this.trackWords(track));
  }

  /** A track in words, for the line that is read out. */
  trackWords(track: number): string {
    const shown = this.context.session.track(track);
    if (!shown) return `${upper(trackName(track))} is not in these frames.`;
    const { frame } = shown.points;
    return `${upper(trackName(track))}, ${POPULATION_WORDS[shown.population]}, frames ${formatCount(frame[0])} to ${formatCount(frame[frame.length - 1])}.`;
  }

  private onTrack(command: EditCommand): void {
    const { session, viewer } = this.context;
    const shown = session.chosen;
    const { frame, chosenTrack } = viewer.get();
    if (!shown || chosenTrack === null) {
      session.state.say('Choose a track first: click on one, or press the full stop key.', 'refusal');
      return;
    }
    switch (command.kind) {
      case 'split': {
        // The part that is in this frame stays chosen.
        const gesture = session.act(acts.splitAt(shown, frame));
        if (gesture) viewer.set({ chosenTrack: gesture.made[0] });
        return;
      }
      case 'trim-before':
        session.act(acts.trimAt(shown, frame, 'before'));
        return;
      case 'trim-after':
        session.act(acts.trimAt(shown, frame, 'after'));
        return;
      case 'remove':
        if (session.act(acts.removeTrack(shown))) viewer.set({ chosenTrack: null });
        return;
      case 'class': {
        const { segmentFrom } = session.state.get();
        if (session.act(acts.classTrack(shown, command.population, frame, segmentFrom))) {
          session.state.set({ segmentFrom: null });
        }
        return;
      }
      case 'mark-segment':
        return this.markSegment(frame);
      case 'join':
        return this.pair.begin(chosenTrack);
      case 'move':
        return this.placing.begin('move', this.cross());
      case 'first-frame':
        viewer.goTo(shown.points.frame[0]);
        return;
      case 'last-frame':
        viewer.goTo(shown.points.frame[shown.points.frame.length - 1]);
        return;
    }
  }

  private markSegment(frame: number): void {
    const { state } = this.context.session;
    if (state.get().segmentFrom === frame) {
      state.set({ segmentFrom: null });
      state.say('The segment is let go: a class is for the whole track again.');
      return;
    }
    state.set({ segmentFrom: frame });
    state.say(`A segment begins in frame ${formatCount(frame)}. Go to its other end and give it a class.`);
  }

  /** Enter: joins the pair, or puts the point where the cross is. */
  private confirm(): void {
    const { tool } = this.context.session.state.get();
    if (tool.kind === 'place') void this.placing.put(tool, tool.at);
    if (tool.kind === 'line') this.marking.put(tool, this.hover ?? tool.at, 0);
    if (tool.kind === 'join' && tool.second !== null) this.pair.join(tool.first, tool.second);
  }

  private cancel(): void {
    const { session, viewer } = this.context;
    const { tool, segmentFrom } = session.state.get();
    if (tool.kind !== 'pick') {
      session.state.set({ tool: PICK });
      session.state.say('Left as it was.');
    } else if (segmentFrom !== null) {
      session.state.set({ segmentFrom: null });
      session.state.say('The segment is let go.');
    } else if (viewer.get().chosenTrack !== null) {
      viewer.set({ chosenTrack: null, chosenEvent: null });
      session.state.say('No track is chosen.');
    }
  }

  /** The next track by distance; while a pair is looked for, the next one that could be joined. */
  private step(direction: 1 | -1): void {
    const { session, viewer } = this.context;
    const { tool } = session.state.get();
    if (tool.kind === 'join') {
      const tracks = this.pair.candidates().map(({ track }) => track);
      if (tracks.length === 0)
        return session.state.say('Nothing ends or begins near in these frames.', 'refusal');
      const at = tool.second === null ? -1 : tracks.indexOf(tool.second);
      const second = tracks[(at + direction + tracks.length) % tracks.length];
      session.state.set({ tool: { ...tool, second } });
      session.state.say(this.trackWords(second));
      return;
    }
    const { shown, chosenTrack } = viewer.get();
    const block = session.block(shown);
    const next = block && this.walk.step(block, shown, chosenTrack, this.sight.middle(), direction);
    if (next === null) return session.state.say('No track is in this frame.', 'refusal');
    this.choose(next);
    this.sight.keepInSight(next);
  }

  private trackAt(place: Point, reachPx: number): number | null {
    const { session, viewer } = this.context;
    const { shown } = viewer.get();
    const block = session.block(shown);
    if (!block) return null;
    if (this.picked?.block !== block || this.picked.frame !== shown) {
      this.picked = { block, frame: shown, picker: createTrackPicker(block, shown, TRAIL_FRAMES) };
    }
    const found = this.picked.picker.nearest(place.x, place.y, reachPx);
    return found < 0 ? null : block.track[found];
  }
}

const POPULATION_WORDS = ['trapped', 'free', 'undecided', 'no class yet'];
