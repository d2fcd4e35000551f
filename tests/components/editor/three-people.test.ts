import { describe, expect, it } from 'vitest';
import type { TrackBlock } from '@/components/canvas/track-block';
import { EditLog, type AsideGesture } from '@/components/editor/log/edit-log';
import { GestureSender, type LinkState } from '@/components/editor/log/gesture-sender';
import { LocalMarks } from '@/components/editor/log/local-marks';
import { LocalTracks } from '@/components/editor/log/local-tracks';
import { markedFrames } from '@/tracking/corrections/marked-frames';
import { CorrectionRefusal } from '@/tracking/corrections/correction';
import { createRandom, type Random } from '@/tracking/random';
import { contents } from './block-contents';
import { EXTENT, FakeServer, Line, MemoryStore } from './fake-server';
import { randomChange, someTracks } from './random-change';

/** A person with a browser of their own. */
class Person {
  readonly line: Line;
  readonly store = new MemoryStore();
  readonly words: string[] = [];
  log!: EditLog;
  sender!: GestureSender;
  tracks!: LocalTracks;
  marks!: LocalMarks;
  behind = false;
  blocks: TrackBlock[] = [];
  link: LinkState = { kind: 'idle' };
  made = 0;
  aside: AsideGesture[] = [];
  private visit = 0;

  constructor(
    private readonly server: FakeServer,
    readonly name: string,
  ) {
    this.line = new Line(server, name);
    this.open();
  }

  /** Opens the page, for the first time or again: all that is kept is what the store holds. */
  open(): void {
    this.visit += 1;
    const { revision, nextNumber, corrections } = this.server.since(0);
    this.look();
    this.tracks = new LocalTracks(() => this.blocks, EXTENT);
    this.marks = new LocalMarks();
    this.marks.renew(this.server.marks());
    this.log = new EditLog({
      analysisId: 'one',
      userId: this.name,
      tab: `${this.name} ${this.visit}`,
      tracks: this.tracks,
      marks: this.marks,
      newId: () => `${this.name}-${String((this.made += 1)).padStart(4, '0')}`,
      now: () => new Date(0),
    });
    Object.assign(this.log, { revision, nextNumber });
    this.log.remember(corrections);
    this.sender = new GestureSender(
      this.log,
      this.line,
      this.store,
      {
        onLink: (link) => (this.link = link),
        onChange: ({ foreign, unseen }) => {
          if (foreign.length > 0 || unseen) this.look();
          if (foreign.length > 0 || this.marks.old) this.lookAtMarks();
          this.log.rebuild();
        },
        onAside: () => undefined,
        onClosed: () => undefined,
      },
      // A line that is down stays down until the test puts it up again.
      async () => void (this.line.down = false),
    );
  }

  /** Reads the tracks anew. */
  look(): void {
    if (this.line.down) return;
    this.blocks = [this.server.block(0, 34), this.server.block(25, 59)];
  }

  /** Fetches the marks anew, as soon as the line is up. */
  lookAtMarks(): void {
    this.behind = this.line.down;
    if (!this.behind) this.marks.renew(this.server.marks());
  }

  act(random: Random): void {
    const turn = random.integer(10);
    if (turn === 0) return this.keep(this.log.undo(0));
    if (turn === 1) return this.keep(this.log.redo(0));
    try {
      const gesture = this.log.make([randomChange(this.server, random)], 'a change', 0);
      this.keep({ gesture, dropped: null });
    } catch (refusal) {
      if (!(refusal instanceof CorrectionRefusal)) throw refusal;
    }
  }

  private keep(turn: { gesture: { id: string } | null; dropped: string | null } | null): void {
    if (turn?.gesture) void this.store.put(turn.gesture as never);
    if (turn?.dropped) void this.store.delete(turn.dropped);
  }
}

describe('three people at once over bad lines', () => {
  it.each([1, 2, 3])('lose no correction and double none (seed %i)', async (seed) => {
    const random = createRandom(seed);
    const server = new FakeServer(someTracks(seed));
    const people = ['ada', 'bo', 'cy'].map((name) => new Person(server, name));
    for (let turn = 0; turn < 120; turn += 1) {
      const person = people[random.integer(3)];
      const fate = random.integer(12);
      if (fate === 0) person.line.down = true;
      if (fate === 1) person.line.loseAnswers = 1;
      if (fate === 2) {
        // The browser is closed and opened again.
        person.sender.close();
        const kept = await person.store.list(person.name, 'one');
        person.line.down = false;
        person.open();
        person.log.resume(kept);
      }
      person.act(random);
      if (!person.line.down) await person.sender.kick();
    }
    for (const person of people) {
      person.line.down = false;
      await person.sender.kick();
    }
    for (const person of people) await person.sender.catchUp();

    // Each gesture that the server has, it has once, and whole.
    const gestures = server.log.map(({ gesture }) => gesture!);
    expect(new Set(gestures).size).toBe(gestures.length);
    expect(gestures.length).toBeGreaterThan(40);
    for (const person of people) {
      expect(person.log.pending).toEqual([]);
      // What was not stored is still there for the person to decide on, and nothing else is.
      const aside = person.log.aside.map(({ gesture }) => gesture.id);
      expect([...person.store.kept.keys()].sort()).toEqual([...new Set(aside)].sort());
      expect(aside.filter((id) => gestures.includes(id))).toEqual([]);
      // And everyone sees what the server has.
      person.look();
      person.log.rebuild();
      for (const block of person.blocks) {
        expect(contents(person.tracks.shown(block))).toEqual(contents(server.block(block.from, block.to)));
      }
      if (person.behind) person.lookAtMarks();
      const marked = markedFrames(server.log, server.state.inForce);
      expect(person.marks.frames()).toEqual(
        marked.map(({ frame, lines, complete }) => ({ frame, lines: lines.length, complete })),
      );
    }
  });

  it('sends nothing after the analysis was signed off, and says so', async () => {
    const random = createRandom(3);
    const server = new FakeServer(someTracks(3));
    const [ada] = [new Person(server, 'ada')];
    while (ada.log.pending.length === 0) ada.act(random);
    server.closed = 'Iva Lund';
    await ada.sender.kick();
    expect(server.log).toEqual([]);
    expect(ada.log.pending).toEqual([]);
    expect(ada.log.aside[0].reason).toContain('Iva Lund');
  });

  it('sets aside what meets another’s change of the same place, and keeps what does not', async () => {
    const server = new FakeServer(someTracks(5));
    const [ada, bo] = [new Person(server, 'ada'), new Person(server, 'bo')];
    const long = [...Array(20).keys()]
      .map((n) => server.state.get(n)!)
      .find(({ frame }) => frame.length > 12)!;
    const { track, frame } = long;
    const point = { frame: frame[2], x_px: 10, y_px: 12 };
    ada.log.make([{ kind: 'split', track, frame: frame[6] }], 'split', 0);
    await ada.sender.kick();

    const kinds = ['move-point', 'split', 'reclass'] as const;
    bo.log.make([{ kind: kinds[0], track, ...point }], 'move', 0);
    bo.log.make([{ kind: kinds[1], track, frame: frame[9] }], 'split', 0);
    await bo.sender.kick();
    expect(server.log.map(({ kind }) => kind)).toEqual(['split', 'move-point']);
    expect(bo.log.aside).toHaveLength(1);
    expect(bo.log.aside[0].reason).toBe(
      `Person ada did something to the same place meanwhile: split track ${track} before frame ${frame[6]}.`,
    );
  });

  it('calls tracks that two people make at once by the numbers that the server gives', async () => {
    const server = new FakeServer(someTracks(5));
    const [ada, bo] = [new Person(server, 'ada'), new Person(server, 'bo')];
    const [one, two] = [...Array(20).keys()]
      .map((n) => server.state.get(n)!)
      .filter(({ frame }) => frame.length > 8);
    const fresh = server.state.nextNumber;
    bo.line.down = true;
    const { made } = bo.log.make([{ kind: 'split', track: two.track, frame: two.frame[4] }], 'split', 0);
    bo.log.make([{ kind: 'remove', track: made[0] }], 'remove', 0);
    ada.log.make([{ kind: 'split', track: one.track, frame: one.frame[4] }], 'split', 0);
    await ada.sender.kick();
    bo.line.down = false;
    await bo.sender.kick();
    expect(server.log.map(({ made: number }) => number)).toEqual([fresh, fresh + 1, null]);
    // Not Ada's new track, which has the number that Bo's would have had.
    expect(server.log[2]).toMatchObject({ kind: 'remove', track: fresh + 1 });
  });
});
