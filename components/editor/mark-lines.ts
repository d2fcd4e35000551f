import type { Point } from '@/components/canvas/view-box';
import { formatCount } from '@/lib/format/count';
import { MARK_POINTS_MOST } from '@/tracking/corrections/marked-frames';
import * as acts from './edit-actions';
import type { EditContext } from './edit-context';
import { PICK, type Tool } from './edit-state';

type LineTool = Extract<Tool, { kind: 'line' }>;

/** Marking vortex lines along their tracers, and saying of a frame that all of its lines are marked. */
export class MarkLines {
  constructor(private readonly context: EditContext) {}

  /** Begins a line; ends the one that is being drawn. @param otherwise where the cross begins */
  turn(otherwise: Point): void {
    const { session, viewer } = this.context;
    const { tool } = session.state.get();
    if (tool.kind === 'line') return this.finish(tool);
    if (session.locked !== null) return session.state.say(session.locked, 'refusal');
    const { frame } = viewer.get();
    session.state.set({ tool: { kind: 'line', frame, points: [], at: otherwise } });
    session.state.say(
      'Mark a line: click from its first tracer to its last, and the last once more to end. By keys: arrows move the cross, Enter sets a point, K ends.',
    );
  }

  /** Sets a point; at the last one it ends the line. @param reachPx within which a tracer is taken for what was meant */
  put(tool: LineTool, place: Point, reachPx: number): void {
    const { session, viewer } = this.context;
    const { frame } = viewer.get();
    if (tool.points.length > 0 && frame !== tool.frame) {
      const words = `This line was begun in frame ${formatCount(tool.frame)}: end it with K, or leave it with Esc.`;
      return session.state.say(words, 'refusal');
    }
    const last = tool.points.at(-1);
    const at = this.tracerNear(place, reachPx) ?? place;
    if (last && Math.hypot(at.x - last.x, at.y - last.y) <= (reachPx > 0 ? reachPx / 2 : 0.5)) {
      return this.finish(tool);
    }
    if (tool.points.length >= MARK_POINTS_MOST) {
      return session.state.say(`A line has at most ${MARK_POINTS_MOST} points: end it with K.`, 'refusal');
    }
    session.state.set({ tool: { ...tool, frame, points: [...tool.points, at], at } });
    session.state.say(
      `Point ${tool.points.length + 1}: x ${at.x.toFixed(1)}, y ${at.y.toFixed(1)} px${at === place ? '' : ', on a tracer'}.`,
    );
  }

  /** Takes the last point back. */
  back(tool: LineTool): void {
    const { state } = this.context.session;
    const points = tool.points.slice(0, -1);
    state.set({ tool: { ...tool, points, at: points.at(-1) ?? tool.at } });
    state.say(points.length === 1 ? 'One point is left.' : `${points.length} points are left.`);
  }

  /** Says that all lines of the frame are marked, or takes that back. */
  turnComplete(): void {
    const { session, viewer } = this.context;
    const { frame } = viewer.get();
    const said = session.marks.completeBy(frame);
    if (said) {
      session.takeBack(said, `call frame ${formatCount(frame)} complete`);
      return;
    }
    const lines = session.marks.lines(frame).length;
    const count = lines === 1 ? 'one line' : lines === 0 ? 'no line' : `${lines} lines`;
    session.act(
      acts.completeFrame(frame),
      `Frame ${formatCount(frame)} is complete with ${count}: the line density takes it as all that can be seen there.`,
    );
  }

  private finish(tool: LineTool): void {
    const { session } = this.context;
    if (tool.points.length < 2) {
      session.state.set({ tool: PICK });
      if (tool.points.length === 0) session.state.say('No more lines are marked.');
      else session.state.say('Left: a line needs two points at least.', 'refusal');
      return;
    }
    const gesture = session.act(acts.markLine(tool.frame, tool.points));
    session.state.set({ tool: gesture ? { ...tool, points: [] } : tool });
  }

  /** The point of a track in this frame that is nearest within reach. */
  private tracerNear(place: Point, reachPx: number): Point | null {
    const { session, viewer } = this.context;
    const { shown: frame } = viewer.get();
    const block = session.block(frame);
    let found: Point | null = null;
    let nearest = reachPx;
    for (let i = 0; block && i < block.count; i += 1) {
      const k = block.start[i] + frame - block.frame[block.start[i]];
      if (k < block.start[i] || k >= block.start[i + 1] || block.frame[k] !== frame) continue;
      const away = Math.hypot(block.x[k] - place.x, block.y[k] - place.y);
      if (away > nearest) continue;
      nearest = away;
      found = { x: block.x[k], y: block.y[k] };
    }
    return found;
  }
}
