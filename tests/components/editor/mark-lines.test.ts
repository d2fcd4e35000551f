import { describe, expect, it } from 'vitest';
import { ViewerStore } from '@/components/canvas/viewer-store';
import { EditController } from '@/components/editor/edit-controller';
import { editCommandOf } from '@/components/editor/edit-keys';
import { EditSession } from '@/components/editor/edit-session';
import { LocalMarks } from '@/components/editor/log/local-marks';
import { EXTENT, FakeServer, Line, MemoryStore } from './fake-server';
import { someTracks } from './random-change';

const FRAME = 20;

function opened(readOnly: string | null = null) {
  const server = new FakeServer(someTracks(4));
  const line = new Line(server, 'ada');
  const viewer = new ViewerStore(EXTENT.frames, { frame: FRAME, low: 0, high: 255 });
  viewer.set({ shown: FRAME });
  let made = 0;
  const session = new EditSession({
    analysisId: 'one',
    userId: 'ada',
    tab: 'tab',
    viewer,
    extent: EXTENT,
    api: line,
    store: new MemoryStore(),
    newId: () => `id-${(made += 1)}`,
    initial: server.since(0),
    closed: null,
    readOnly,
  });
  const block = server.block(0, EXTENT.frames - 1);
  session.attach({ at: () => block, kept: () => [block], renew: () => undefined } as never);
  const controller = new EditController({
    session,
    viewer,
    image: EXTENT,
    refine: async () => null,
    onFind: () => undefined,
  });
  const said = () => session.state.get().message?.text ?? '';
  /** All that waits is stored and looked at anew. */
  const settle = async () => {
    await session.kick();
    await session.renewMarks();
  };
  return { server, line, session, controller, viewer, said, settle, block };
}

const thousandth = (px: number) => Math.round(1000 * px) / 1000;

/** Tracers of the frame. */
function tracers({ block }: ReturnType<typeof opened>) {
  const there: { x: number; y: number }[] = [];
  for (let i = 0; i < block.count; i += 1) {
    const k = block.start[i] + FRAME - block.frame[block.start[i]];
    if (k >= block.start[i] && k < block.start[i + 1]) there.push({ x: block.x[k], y: block.y[k] });
  }
  return there;
}

describe('marking lines in the editor', () => {
  it('draws from tracer to tracer by clicks, and a second click on the last one ends the line', async () => {
    const page = opened();
    const { controller, session, server, settle } = page;
    const [one, two] = tracers(page);
    controller.run({ kind: 'mark-line' });
    controller.pick({ x: one.x + 2, y: one.y - 1 }, 6);
    controller.pick({ x: 5, y: 5 }, 6);
    controller.pick({ x: two.x, y: two.y + 3 }, 6);
    expect(session.state.get().tool).toMatchObject({ kind: 'line', points: [one, { x: 5, y: 5 }, two] });
    controller.pick({ x: two.x + 1, y: two.y }, 6);
    expect(session.marks.lines(FRAME).map(({ points }) => points)).toEqual([
      [
        [thousandth(one.x), thousandth(one.y)],
        [5, 5],
        [thousandth(two.x), thousandth(two.y)],
      ],
    ]);
    // The next line can be begun at once.
    expect(session.state.get().tool).toMatchObject({ kind: 'line', points: [] });
    await settle();
    expect(server.log.map(({ kind }) => kind)).toEqual(['mark-line']);
    expect(session.marks.lines(FRAME)).toHaveLength(1);
    expect(session.marks.lines(FRAME)[0].by).toBe('ada');
  });

  it('draws by keys alone, with a point taken back on the way', () => {
    const page = opened();
    const { controller, session, said } = page;
    const press = (key: string) => {
      const { kind } = session.state.get().tool;
      const drawing = kind === 'line';
      const event = { key, shiftKey: false, ctrlKey: false, altKey: false, metaKey: false };
      const command = editCommandOf(event, kind === 'place' || drawing, drawing);
      if (command) controller.run(command);
    };
    controller.point({ x: 100, y: 100 });
    press('k');
    press('Enter');
    for (let i = 0; i < 5; i += 1) press('ArrowRight');
    press('Enter');
    press('Backspace');
    expect(said()).toBe('One point is left.');
    for (let i = 0; i < 3; i += 1) press('ArrowDown');
    press('Enter');
    press('k');
    expect(session.marks.lines(FRAME).map(({ points }) => points)).toEqual([[[100, 100], [100, 103]]]); // prettier-ignore
    press('k');
    expect(session.state.get().tool).toEqual({ kind: 'pick' });
  });

  it('says that a frame is complete and takes it back, for the next person too', async () => {
    const { controller, session, server, settle } = opened();
    controller.run({ kind: 'complete-frame' });
    expect(session.marks.frames()).toEqual([{ frame: FRAME, lines: 0, complete: true }]);
    await settle();
    controller.run({ kind: 'complete-frame' });
    expect(session.marks.frames()).toEqual([]);
    await settle();
    expect(server.log.map(({ kind }) => kind)).toEqual(['complete-frame', 'undo']);
    expect(session.marks.frames()).toEqual([]);
    // Undo takes the taking back back.
    session.undo();
    await settle();
    expect(session.marks.frames()).toEqual([{ frame: FRAME, lines: 0, complete: true }]);
  });

  it('removes a line that someone else drew, and does it again after undo', async () => {
    const { session, server, settle } = opened();
    server.append('bo', 'g', [{ kind: 'mark-line', frame: FRAME, points: [[1, 1], [9, 9]], gesture: 'g' }], 0); // prettier-ignore
    await session.catchUp();
    await settle();
    const [line] = session.marks.lines(FRAME);
    expect(line.by).toBe('bo');
    session.takeBack(line, 'mark a line in frame 20');
    expect(session.marks.lines(FRAME)).toEqual([]);
    await settle();
    session.undo();
    await settle();
    expect(session.marks.lines(FRAME)).toHaveLength(1);
    session.redo();
    await settle();
    expect(session.marks.lines(FRAME)).toEqual([]);
  });

  it('goes on in the frame in which the line was begun only', () => {
    const { controller, session, viewer, said } = opened();
    controller.run({ kind: 'mark-line' });
    controller.pick({ x: 5, y: 5 }, 2);
    viewer.set({ frame: FRAME + 1, shown: FRAME + 1 });
    controller.pick({ x: 50, y: 50 }, 2);
    expect(said()).toMatch(/^This line was begun in frame 20/);
    expect(session.state.get().tool).toMatchObject({ points: [{ x: 5, y: 5 }] });
    controller.run({ kind: 'cancel' });
    expect(session.marks.frames()).toEqual([]);
  });

  it('is refused to those who can only look', () => {
    const { controller, session, said } = opened('Guests can look.');
    controller.run({ kind: 'mark-line' });
    expect(said()).toBe('Guests can look.');
    controller.run({ kind: 'complete-frame' });
    expect(session.marks.frames()).toEqual([]);
  });

  it('shows what was stored until the server’s marks have it', () => {
    const marks = new LocalMarks();
    marks.apply('g', [{ kind: 'complete-frame', frame: 3 }]);
    marks.stored('g', 7);
    marks.renew({ revision: 6, marks: [] });
    expect([marks.old, marks.completeBy(3)?.key]).toEqual([true, 'g']);
    marks.renew({ revision: 7, marks: [{ mark: { kind: 'complete-frame', frame: 3 }, id: 'i', gesture: 'g', by: null }] }); // prettier-ignore
    expect([marks.old, marks.completeBy(3)]).toEqual([false, { key: 'g', stored: { id: 'i' } }]);
    // An older answer that comes late changes nothing.
    marks.renew({ revision: 5, marks: [] });
    expect(marks.completeBy(3)).not.toBeNull();
  });
});
