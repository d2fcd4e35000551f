import type { Point } from '@/components/canvas/view-box';
import type { Grip } from '@/components/canvas/use-well-gestures';
import { ApiError, LINK_LOST } from '@/components/data/api-client';
import { formatCount } from '@/lib/format/count';
import * as acts from './edit-actions';
import { upper, type EditContext } from './edit-context';
import { PICK, type Tool } from './edit-state';
import { trackName } from './log/gesture';

type Place = Extract<Tool, { kind: 'place' }>;

/** Adding and moving a point: a cross that is led by pointer or keys, and the detector's fit near it. */
export class PlacePoint {
  constructor(private readonly context: EditContext) {}

  /** A press while a point is moved: dragging carries the cross along. */
  grab(place: Point, reachPx: number): Grip | null {
    const { state } = this.context.session;
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

  /** @param otherwise where the cross begins when nothing tells a better place */
  begin(purpose: Place['purpose'], otherwise: Point): void {
    const { session, viewer } = this.context;
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
    const at = (shown && acts.expectedPlace(shown, frame)) ?? otherwise;
    const track = shown ? chosenTrack : null;
    session.state.set({ tool: { kind: 'place', purpose, track, at, byEye: false, busy: false } });
    const what = purpose === 'move' ? 'Move the point' : track === null ? 'Begin a new track' : 'Add a point';
    session.state.say(
      `${what}: click where it is, or move the cross with the arrow keys and press Enter. The fit finds the tracer near it.`,
    );
  }

  nudge(dxPx: number, dyPx: number): void {
    const { state } = this.context.session;
    const { tool } = state.get();
    if (tool.kind !== 'line' && (tool.kind !== 'place' || tool.busy)) return;
    const { width, height } = this.context.image;
    const at = {
      x: Math.min(width - 0.51, Math.max(-0.5, tool.at.x + dxPx)),
      y: Math.min(height - 0.51, Math.max(-0.5, tool.at.y + dyPx)),
    };
    state.set({ tool: tool.kind === 'line' ? { ...tool, at } : { ...tool, at, byEye: false } });
    state.say(`x ${at.x.toFixed(1)}, y ${at.y.toFixed(1)} px`);
  }

  /** Puts the point near a place where the fit finds the tracer; by eye where it finds none and the person insists. */
  async put(tool: Place, at: Point): Promise<void> {
    const { session, viewer } = this.context;
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
      const refined = await this.context.refine(frame, at);
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
    const { session, viewer } = this.context;
    const act = acts.putPoint(session.track(tool.track), point);
    const gesture = session.act(act, `${upper(act.words)}: ${where}.`);
    session.state.set({ tool: gesture ? PICK : { ...tool, busy: false } });
    if (gesture && tool.track === null) viewer.set({ chosenTrack: gesture.made[0] });
  }
}
