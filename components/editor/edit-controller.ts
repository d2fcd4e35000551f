import { createTrackPicker, type TrackPicker } from '@/components/canvas/pick-track';
import type { TrackBlock } from '@/components/canvas/track-block';
import { TRAIL_FRAMES } from '@/components/canvas/track-blocks';
import { centreOn, toImage, toScreen, type Point, type Size } from '@/components/canvas/view-box';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import type { Grip } from '@/components/canvas/use-well-gestures';
import { ApiError, LINK_LOST } from '@/components/data/api-client';
import { formatCount } from '@/lib/format/count';
import * as acts from './edit-actions';
import type { EditCommand } from './edit-keys';
import type { EditSession } from './edit-session';
import { PICK, type RefinedPoint, type Tool } from './edit-state';
import { joinCandidates, type JoinCandidate } from './join-candidates';
import { trackName } from './log/gesture';
import { TrackWalk } from './track-walk';

type Place = Extract<Tool, { kind: 'place' }>;

interface ControllerOptions {
  session: EditSession;
  viewer: ViewerStore;
  image: Size;
  /** The detector's fit near a place of a frame; null where it finds no tracer. */
  refine: (frame: number, at: Point) => Promise<RefinedPoint | null>;
  /** Puts the keyboard into the field for a track's number. */
  onFind: () => void;
}

/** What keys, buttons and the pointer do: everything that can be done can be done by each of them. */
export class EditController {
  private readonly walk = new TrackWalk();
  private picked: { block: TrackBlock; frame: number; picker: TrackPicker } | null = null;
  private hover: Point | null = null;

  constructor(private readonly options: ControllerOptions) {}

  /** Where the pointer is, px of the image; null when it has left. */
  point(place: Point | null): void {
    this.hover = place;
  }

  /** What the magnifier looks at. */
  get focus(): Point | null {
    const { tool } = this.options.session.state.get();
    return tool.kind === 'place' ? tool.at : this.hover;
  }

  run(command: EditCommand): void {
    const { session } = this.options;
    switch (command.kind) {
      case 'next':
      case 'previous':
        return this.step(command.kind === 'next' ? 1 : -1);
      case 'undo':
        return session.undo();
      case 'redo':
        return session.redo();
      case 'ghosts':
        return this.toggle('ghosts', 'Past and future places');
      case 'magnifier':
        return this.toggle('magnifier', 'Magnifier');
      case 'brightness':
        return this.turnBrightness();
      case 'find':
        return this.options.onFind();
      case 'add':
        return this.beginPlace('add');
      case 'nudge':
        return this.nudge(command.dxPx, command.dyPx);
      case 'place':
        return this.confirm();
      case 'cancel':
        return this.cancel();
      default:
        return this.onTrack(command);
    }
  }

  /** A click into the picture. */
  pick(place: Point, reachPx: number): void {
    const { session } = this.options;
    const { tool } = session.state.get();
    if (tool.kind === 'place') {
      void this.put(tool, place);
      return;
    }
    if (tool.kind === 'join') {
      const second = this.candidateAt(place, reachPx * 1.5) ?? this.trackAt(place, reachPx);
      if (second !== null && second !== tool.first) this.join(tool.first, second);
      return;
    }
    this.choose(this.trackAt(place, reachPx));
  }

  /** A press while a point is moved: dragging carries the cross along. */
  grab(place: Point, reachPx: number): Grip | null {
    const { state } = this.options.session;
    const { tool } = state.get();
    if (tool.kind !== 'place' || tool.busy) return null;
    if (Math.hypot(place.x - tool.at.x, place.y - tool.at.y) > reachPx) return null;
    const from = tool.at;
    const move = (to: Point) =>
      state.set({ tool: { ...tool, at: { x: from.x + to.x - place.x, y: from.y + to.y - place.y } } });
    return {
      move,
      drop: (to, travelled) => {
        if (travelled) move(to);
        void this.put(state.get().tool as Place, (state.get().tool as Place).at);
      },
      cancel: () => state.set({ tool }),
    };
  }

  /** Chooses a track by any means and says what it is. */
  choose(track: number | null, bring = false): void {
    const { session, viewer } = this.options;
    viewer.set({ chosenTrack: track, chosenEvent: null });
    if (bring && track !== null) this.bringWhenShown(track);
    session.state.set({ segmentFrom: null });
    if (track !== null) session.state.say(this.trackWords(track));
  }

  /** A track in words, for the line that is read out. */
  trackWords(track: number): string {
    const shown = this.options.session.track(track);
    if (!shown) return `${upper(trackName(track))} is not in these frames.`;
    const { frame } = shown.points;
    return `${upper(trackName(track))}, ${POPULATION_WORDS[shown.population]}, frames ${formatCount(frame[0])} to ${formatCount(frame[frame.length - 1])}.`;
  }

  /** Tracks that the first of a pair could be joined with. */
  candidates(): JoinCandidate[] {
    const { session, viewer } = this.options;
    const { tool } = session.state.get();
    if (tool.kind !== 'join') return [];
    const block = session.block(viewer.get().shown, false);
    const first = session.track(tool.first);
    return block && first ? joinCandidates(block, first) : [];
  }

  private onTrack(command: EditCommand): void {
    const { session, viewer } = this.options;
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
        return this.beginJoin(chosenTrack);
      case 'move':
        return this.beginPlace('move');
      case 'first-frame':
        viewer.goTo(shown.points.frame[0]);
        return;
      case 'last-frame':
        viewer.goTo(shown.points.frame[shown.points.frame.length - 1]);
        return;
    }
  }

  private markSegment(frame: number): void {
    const { state } = this.options.session;
    if (state.get().segmentFrom === frame) {
      state.set({ segmentFrom: null });
      state.say('The segment is let go: a class is for the whole track again.');
      return;
    }
    state.set({ segmentFrom: frame });
    state.say(`A segment begins in frame ${formatCount(frame)}. Go to its other end and give it a class.`);
  }

  private beginJoin(first: number): void {
    const { session } = this.options;
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

  private join(first: number, second: number): void {
    const { session, viewer } = this.options;
    const one = session.track(first);
    const other = session.track(second);
    const gesture = session.act(acts.joinTracks(first, second));
    if (!gesture) return;
    session.state.set({ tool: PICK });
    // The one that begins first keeps its number.
    if (one && other && other.points.frame[0] < one.points.frame[0]) viewer.set({ chosenTrack: second });
  }

  private beginPlace(purpose: Place['purpose']): void {
    const { session, viewer } = this.options;
    if (session.locked !== null) return session.state.say(session.locked, 'refusal');
    const { frame, chosenTrack } = viewer.get();
    const shown = session.chosen;
    if (purpose === 'add' && shown && acts.hasPoint(shown, frame)) {
      const words = `${upper(trackName(shown.points.track))} has a point in frame ${formatCount(frame)} already: move it with M, or press Esc twice to begin a new track.`;
      return session.state.say(words, 'refusal');
    }
    if (purpose === 'move' && shown && !acts.hasPoint(shown, frame)) {
      return session.state.say(
        `${upper(trackName(shown.points.track))} has no point of its own in frame ${formatCount(frame)}: add one with A.`,
        'refusal',
      );
    }
    const at = (shown && acts.expectedPlace(shown, frame)) ?? this.hover ?? this.middle();
    const track = shown ? chosenTrack : null;
    session.state.set({ tool: { kind: 'place', purpose, track, at, byEye: false, busy: false } });
    const what = purpose === 'move' ? 'Move the point' : track === null ? 'Begin a new track' : 'Add a point';
    session.state.say(
      `${what}: click where it is, or move the cross with the arrow keys and press Enter. The fit finds the tracer near it.`,
    );
  }

  /** Enter: joins the pair, or puts the point where the cross is. */
  private confirm(): void {
    const { tool } = this.options.session.state.get();
    if (tool.kind === 'place') void this.put(tool, tool.at);
    if (tool.kind === 'join' && tool.second !== null) this.join(tool.first, tool.second);
  }

  private nudge(dxPx: number, dyPx: number): void {
    const { state } = this.options.session;
    const { tool } = state.get();
    if (tool.kind !== 'place' || tool.busy) return;
    const { width, height } = this.options.image;
    const at = {
      x: Math.min(width - 0.51, Math.max(-0.5, tool.at.x + dxPx)),
      y: Math.min(height - 0.51, Math.max(-0.5, tool.at.y + dyPx)),
    };
    state.set({ tool: { ...tool, at, byEye: false } });
    state.say(`x ${at.x.toFixed(1)}, y ${at.y.toFixed(1)} px`);
  }

  /** Puts the point near a place where the fit finds the tracer; by eye where it finds none and the person insists. */
  private async put(tool: Place, at: Point): Promise<void> {
    const { session, viewer } = this.options;
    if (tool.busy) return;
    const { frame } = viewer.get();
    if (tool.byEye && Math.hypot(at.x - tool.at.x, at.y - tool.at.y) < 1) {
      this.finish(tool, { frame, x_px: at.x, y_px: at.y }, 'by eye, ± 0.5 px');
      return;
    }
    session.state.set({ tool: { ...tool, at, busy: true } });
    let sentence =
      'The fit finds no tracer there. Enter, or another click at the same place, puts the point by eye, ± 0.5 px.';
    try {
      const refined = await this.options.refine(frame, at);
      // The person went on to something else meanwhile.
      if (session.state.get().tool.kind !== 'place' || viewer.get().frame !== frame) return;
      if (refined) {
        const { x, y, sx, sy, brightness, faint } = refined;
        const point = {
          frame,
          x_px: x,
          y_px: y,
          sx_px: sx,
          sy_px: sy,
          ...(brightness === null ? {} : { brightness }),
        };
        this.finish(
          tool,
          point,
          `x ${x.toFixed(2)} ± ${sx.toFixed(2)}, y ${y.toFixed(2)} ± ${sy.toFixed(2)} px${faint ? ', fainter than the detector asks for' : ''}`,
        );
        return;
      }
    } catch (error) {
      if (!(error instanceof ApiError)) throw error;
      const why = error.code === LINK_LOST ? 'The fit can’t be asked while the link is lost.' : error.message;
      sentence = `${why} Enter, or another click at the same place, puts the point by eye, ± 0.5 px.`;
    }
    session.state.set({ tool: { ...tool, at, byEye: true, busy: false } });
    session.state.say(sentence, 'refusal');
  }

  private finish(tool: Place, point: Parameters<typeof acts.putPoint>[1], where: string): void {
    const { session, viewer } = this.options;
    const act = acts.putPoint(session.track(tool.track), point);
    const gesture = session.act(act, `${upper(act.words)}: ${where}.`);
    session.state.set({ tool: gesture ? PICK : { ...tool, busy: false } });
    if (gesture && tool.track === null) viewer.set({ chosenTrack: gesture.made[0] });
  }

  private cancel(): void {
    const { session, viewer } = this.options;
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
    const { session, viewer } = this.options;
    const { tool } = session.state.get();
    if (tool.kind === 'join') {
      const tracks = this.candidates().map(({ track }) => track);
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
    const next = block && this.walk.step(block, shown, chosenTrack, this.middle(), direction);
    if (next === null) return session.state.say('No track is in this frame.', 'refusal');
    this.choose(next);
    this.keepInSight(next);
  }

  private toggle(name: 'ghosts' | 'magnifier', words: string): void {
    const { state } = this.options.session;
    const on = !state.get()[name];
    state.set({ [name]: on });
    state.say(`${words}: ${on ? 'on' : 'off'}.`);
  }

  private turnBrightness(): void {
    const { session, viewer } = this.options;
    const brightness = viewer.get().brightness === 'log' ? 'linear' : 'log';
    viewer.set({ brightness });
    session.state.say(`Brightness is shown ${brightness === 'log' ? 'on a logarithmic scale' : 'as it is'}.`);
  }

  private trackAt(place: Point, reachPx: number): number | null {
    const { session, viewer } = this.options;
    const { shown } = viewer.get();
    const block = session.block(shown);
    if (!block) return null;
    if (this.picked?.block !== block || this.picked.frame !== shown) {
      this.picked = { block, frame: shown, picker: createTrackPicker(block, shown, TRAIL_FRAMES) };
    }
    const found = this.picked.picker.nearest(place.x, place.y, reachPx);
    return found < 0 ? null : block.track[found];
  }

  private candidateAt(place: Point, reachPx: number): number | null {
    const { session, viewer } = this.options;
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

  private middle(): Point {
    const { view, well } = this.options.viewer.get();
    if (!view || !well) return { x: 0, y: 0 };
    return toImage(view, { x: well.width / 2, y: well.height / 2 });
  }

  /** Moves the picture only where the track would be out of it. */
  private keepInSight(track: number): void {
    const { session, viewer, image } = this.options;
    const { view, well, shown } = viewer.get();
    const shownTrack = session.track(track);
    const place = shownTrack && acts.placeIn(shownTrack, shown);
    if (!view || !well || !place) return;
    const at = toScreen(view, place);
    if (at.x >= 0 && at.y >= 0 && at.x <= well.width && at.y <= well.height) return;
    viewer.set({ view: centreOn(view, place, image, well) });
  }

  /** Brings a track into sight once its frame is there. */
  bringWhenShown(track: number): void {
    const { viewer } = this.options;
    const look = () => {
      const { frame, shown, chosenTrack } = viewer.get();
      if (frame !== shown && chosenTrack === track) return;
      stop();
      if (chosenTrack === track) this.keepInSight(track);
    };
    const stop = viewer.subscribe(look);
    look();
  }
}

const POPULATION_WORDS = ['trapped', 'free', 'undecided', 'no class yet'];

const upper = (words: string): string => words.charAt(0).toUpperCase() + words.slice(1);
const framesText = (frames: number): string => (frames === 1 ? 'one frame' : `${frames} frames`);
