import { UNDECIDED, type TrackBlock } from '@/components/canvas/track-block';
import { applyOne, type RecordingExtent } from '@/tracking/corrections/apply-one';
import { isMark, makesTrack, type Correction } from '@/tracking/corrections/correction';
import { emptyTrack, NOT_GIVEN, type EditedTrack } from '@/tracking/corrections/edited-track';
import { givenStretches } from '@/tracking/corrections/pieces';
import { rebuildBlock, type BlockTrack } from '../block-tracks';

/** A track as it is shown: its points, and the population that it is drawn with. */
export interface ShownTrack {
  points: EditedTrack;
  /** Code as in `TrackBlock`. */
  population: number;
  /** What the machine called it, or the track that it comes from. */
  machine: number;
  pTrapped: number;
}

/** What one gesture changed, on top of blocks that do not have it yet. */
export interface Step {
  gesture: string;
  /** Revision at which the server stored it; null while it has not. */
  revision: number | null;
  /** By number; null where a track is gone or was not there. */
  before: Map<number, ShownTrack | null>;
  after: Map<number, ShownTrack | null>;
}

type Change = Exclude<Correction, { kind: 'undo' }>;

/**
 * Tracks as this person sees them: blocks of the server, and over them what was done here and is not
 * in them yet. Changes are made by the same function as on the server.
 */
export class LocalTracks {
  private readonly steps: Step[] = [];
  private version = 0;
  private overOf = new WeakMap<TrackBlock, { version: number; over: Map<number, ShownTrack | null> }>();
  private shownOf = new WeakMap<TrackBlock, { version: number; block: TrackBlock }>();

  /** @param kept the blocks that are here, each with the revision it was read at. */
  constructor(
    private readonly kept: () => readonly TrackBlock[],
    private readonly extent: RecordingExtent,
  ) {}

  /** A block with everything that is newer than it. */
  shown(block: TrackBlock): TrackBlock {
    const known = this.shownOf.get(block);
    if (known?.version === this.version) return known.block;
    const over = this.over(block);
    const others: BlockTrack[] = [];
    for (const [number, track] of over) if (track) others.push(blockTrack(number, track));
    const made = over.size === 0 ? block : rebuildBlock(block, (i) => !over.has(block.track[i]), others);
    this.shownOf.set(block, { version: this.version, block: made });
    return made;
  }

  /** A track as far as it is known here; null when it is not, or is gone. */
  get(number: number): ShownTrack | null {
    const parts: ShownTrack[] = [];
    const blocks = [...this.kept()].sort((a, b) => a.revision - b.revision);
    for (const block of blocks) {
      const over = this.over(block);
      const part = over.has(number) ? over.get(number)! : partOf(block, number);
      if (part) parts.push(part);
    }
    // A track made here lies in no block.
    if (parts.length === 0)
      return this.steps.findLast(({ after }) => after.has(number))?.after.get(number) ?? null;
    return merge(parts);
  }

  /**
   * Makes changes, each on what the one before left.
   * @param made numbers that new tracks get, in order.
   * @throws CorrectionRefusal and changes nothing
   */
  apply(
    gesture: string,
    changes: readonly Change[],
    made: readonly number[],
    revision: number | null = null,
  ): Step {
    const before = new Map<number, ShownTrack | null>();
    const after = new Map<number, ShownTrack | null>();
    const now = (number: number) => {
      if (after.has(number)) return after.get(number)!;
      if (!before.has(number)) before.set(number, this.get(number));
      return before.get(number)!;
    };
    const numbers = [...made];
    for (const change of changes) {
      const fresh = makesTrack(change) ? numbers.shift()! : -1;
      const model = isMark(change) || change.track === null ? null : now(change.track);
      const store = {
        get: (number: number) => now(number)?.points ?? null,
        set: (number: number, points: EditedTrack | null) => {
          const like = now(number) ?? model;
          after.set(number, points && { points, ...populationOf(points, like) });
        },
      };
      applyOne(store, change, fresh, this.extent);
    }
    return this.push({ gesture, revision, before, after });
  }

  /** Puts the tracks of a step back to what they were. */
  takeBack(gesture: string, step: Step): Step {
    return this.push({ gesture, revision: null, before: step.after, after: step.before });
  }

  /** Forgets a step that is not to be shown any more. */
  drop(gesture: string): void {
    const at = this.steps.findIndex((step) => step.gesture === gesture);
    if (at < 0) return;
    this.steps.splice(at, 1);
    this.version += 1;
  }

  stepOf(gesture: string): Step | null {
    return this.steps.find((step) => step.gesture === gesture) ?? null;
  }

  /** The server stored a step. */
  stored(gesture: string, revision: number): void {
    const step = this.stepOf(gesture);
    if (step) step.revision = revision;
    this.version += 1;
  }

  /** Tracks have got other numbers. */
  rename(numbers: ReadonlyMap<number, number>): void {
    if (numbers.size === 0) return;
    for (const step of this.steps) {
      step.before = renamed(step.before, numbers);
      step.after = renamed(step.after, numbers);
    }
    this.version += 1;
  }

  /** Gestures that lie over the blocks. */
  get stepCount(): number {
    return this.steps.length;
  }

  /** Whether a person changed the track here. */
  touched(number: number): boolean {
    return this.steps.some(({ after }) => after.has(number));
  }

  /** Steps that every kept block has in it are not needed any more. */
  forgetOld(): void {
    const oldest = Math.min(Infinity, ...this.kept().map(({ revision }) => revision));
    const keep = this.steps.filter(({ revision }) => revision === null || revision > oldest);
    if (keep.length === this.steps.length || !Number.isFinite(oldest)) return;
    this.steps.splice(0, this.steps.length, ...keep);
    this.version += 1;
  }

  private push(step: Step): Step {
    this.steps.push(step);
    this.version += 1;
    return step;
  }

  /** What lies over a block, by number. */
  private over(block: TrackBlock): ReadonlyMap<number, ShownTrack | null> {
    const known = this.overOf.get(block);
    if (known?.version === this.version) return known.over;
    const over = new Map<number, ShownTrack | null>();
    for (const { revision, after } of this.steps) {
      if (revision !== null && revision <= block.revision) continue;
      for (const [number, track] of after) over.set(number, track);
    }
    this.overOf.set(block, { version: this.version, over });
    return over;
  }
}

/**
 * Entry of a block as a whole track: points that lie outside the block count as measured but have no
 * position, so that its life is the whole one. Errors of positions are not known here.
 */
function partOf(block: TrackBlock, number: number): ShownTrack | null {
  const i = block.track.indexOf(number);
  if (i < 0) return null;
  const points = emptyTrack(number, block.firstFrame[i], block.lastFrame[i]);
  points.flags.fill(0);
  for (let k = block.start[i]; k < block.start[i + 1]; k += 1) {
    const at = block.frame[k] - points.frame[0];
    points.xPx[at] = block.x[k];
    points.yPx[at] = block.y[k];
    points.flags[at] = block.flags[k];
  }
  for (const [from, to, code] of block.given.get(number) ?? []) {
    points.given.fill(code, from - points.frame[0], to - points.frame[0] + 1);
  }
  const population = block.population[i];
  const machine = wholeGiven(points) === NOT_GIVEN ? population : UNDECIDED;
  return { points, population, machine, pTrapped: block.pTrapped[i] };
}

/** What several blocks know of one track, as one. */
function merge(parts: readonly ShownTrack[]): ShownTrack {
  if (parts.length === 1) return parts[0];
  const { points: newest, ...rest } = parts[parts.length - 1];
  const whole = emptyTrack(newest.track, newest.frame[0], newest.frame[newest.frame.length - 1]);
  whole.flags.fill(0);
  for (const { points } of parts) {
    for (let k = 0; k < points.frame.length; k += 1) {
      const at = points.frame[k] - whole.frame[0];
      if (Number.isNaN(points.xPx[k]) || at < 0 || at >= whole.frame.length) continue;
      for (const name of ['xPx', 'yPx', 'sxPx', 'syPx', 'brightness'] as const)
        whole[name][at] = points[name][k];
      whole.flags[at] = points.flags[k];
      if (points.given[k] !== NOT_GIVEN) whole.given[at] = points.given[k];
    }
  }
  return { points: whole, ...rest };
}

/** What a person said of the whole of a track, else what the machine said of the track it comes from. */
function populationOf(points: EditedTrack, like: ShownTrack | null): Omit<ShownTrack, 'points'> {
  const given = wholeGiven(points);
  const machine = like?.machine ?? UNDECIDED;
  if (given !== NOT_GIVEN) return { population: given, machine, pTrapped: Number.NaN };
  return { population: machine, machine, pTrapped: like?.pTrapped ?? Number.NaN };
}

const wholeGiven = ({ given }: EditedTrack): number =>
  given.every((code) => code === given[0]) ? given[0] : NOT_GIVEN;

function blockTrack(number: number, { points, population, pTrapped }: ShownTrack): BlockTrack {
  return {
    track: number,
    population,
    pTrapped,
    firstFrame: points.frame[0],
    lastFrame: points.frame[points.frame.length - 1],
    frame: points.frame,
    x: points.xPx,
    y: points.yPx,
    flags: points.flags,
    given: givenStretches(points),
  };
}

function renamed(
  tracks: ReadonlyMap<number, ShownTrack | null>,
  numbers: ReadonlyMap<number, number>,
): Map<number, ShownTrack | null> {
  const now = (number: number) => numbers.get(number) ?? number;
  return new Map(
    [...tracks].map(([number, track]) => [
      now(number),
      track && { ...track, points: { ...track.points, track: now(number) } },
    ]),
  );
}
