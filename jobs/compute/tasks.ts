import type { ImageFacts } from '@/lib/analysis-facts';
import type { Film } from '@/lib/review/film';
import type { FilmPathView } from '@/lib/views/review-view';
import type { RefusedStack, StackReport, StackSource } from '@/stacks/stack-report';
import type { StackPlace } from '@/stacks/stack-place';
import type { RehearsalFound } from '@/tracking/rehearsal/assess-rehearsal';
import type { RehearsalAssessment } from '@/tracking/rehearsal/assessment';
import type { RehearsalPlan } from '@/tracking/rehearsal/plan';
import type { MarkedFrame } from '@/tracking/corrections/marked-frames';
import type { FlowMeasures, ImageSize, KnownPopulations } from '@/tracking/flow-measures';
import type { FlowInput, FlowPart, FlowPartResults } from '@/tracking/flow-parts';
import type { PlacedSpot } from '@/tracking/detect';
import type { NamedTracks } from '@/tracking/populations/named-tracks';
import type { Conditions, Recipe, RecipeRequest, Spots, Tracks } from '@/tracking/types';
import type { TracksAt } from './track-file';

// What is computed in child processes: plain data in, plain data out, no database, no network.

export interface InspectInput {
  source: StackSource;
  /** Folder that receives the frame index and the previews. */
  outDir: string;
  usePages?: number;
  channel?: number | 'mean';
  /** What the sender made of the bytes, per file of the source; null where the sender did not say. */
  expectedSha256: (string | null)[];
  /** Scale for the pictures; what the file says of itself when left out. */
  scale?: { pixelSizeM: number; frameIntervalS: number };
  /** False where nobody will look at pictures. */
  previews: boolean;
}

/** Frames of a stack that may be read already, or why there are none. */
export type IndexOutput = { state: 'indexed'; frames: number; width: number; height: number } | RefusedStack;

export interface MeasureImageInput {
  stackDir: StackPlace;
  request: RecipeRequest;
  pixelSizeM: number;
}
export interface MeasureImageOutput {
  /** The image model as bytes, see `encode-image-model.ts`. */
  model: Uint8Array;
  facts: ImageFacts;
  recipe: Recipe;
}

export interface DetectChunkInput {
  stackDir: StackPlace;
  model: Uint8Array;
  /** Tells models apart: the same key always comes with the same model and recipe. */
  modelKey: string;
  recipe: Recipe;
  firstFrame: number;
  frames: number;
}
export interface DetectChunkOutput {
  /** Encoded by tracking/spots. */
  spots: Uint8Array;
  spotCount: number;
  spotsPerFrame: number[];
  /** Time spent waiting for frames that were not read yet, ms, of all the time spent. */
  readingMs: number;
  tookMs: number;
}

/** Files on this machine's disk instead of messages: a long recording has too many spots and tracks for those. */
export interface LinkTracksInput {
  /** Encoded spots of all chunks, in order. */
  chunkPaths: string[];
  /** Receives the tracks, see `track-file.ts`. */
  tracksPath: string;
  image: ImageSize;
  recipe: Recipe;
}
export interface LinkTracksOutput {
  tracks: number;
  points: number;
}

export interface MeasureFlowInput {
  tracks: TracksAt;
  image: ImageSize;
  conditions: Conditions;
  recipe: Recipe;
  /** Populations of tracks that stand. */
  known?: KnownPopulations;
  /** Lines that people marked. */
  marks?: readonly MarkedFrame[];
}

/** One part of the flow measures, once the tracks are named. */
export type MeasureFlowPartInput = Omit<FlowInput, 'tracks'> & { tracks: TracksAt; part: FlowPart };

/** Asks for the position of a tracer near a place in one frame. */
export interface RefinePointInput {
  stackDir: string;
  model: Uint8Array;
  /** Tells models apart: the same key always comes with the same model and recipe. */
  modelKey: string;
  recipe: Recipe;
  frame: number;
  xPx: number;
  yPx: number;
}
export interface RefinePointOutput {
  /** Null where no light of a tracer fits. */
  spot: PlacedSpot | null;
}

export interface TryRecipeInput {
  stackDir: StackPlace;
  /** At most 8, any order. */
  frames: number[];
  request: RecipeRequest;
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>;
}
export interface TryRecipeOutput {
  recipe: Recipe;
  facts: ImageFacts;
  frames: { frame: number; noiseE: number; spots: Spots }[];
  /** Tracks over runs of consecutive frames among those chosen. */
  tracks: Tracks;
}

export interface ComposeStripsInput {
  stackDir: StackPlace;
  contrast: { low: number; high: number };
  pixelSizeM: number;
  frameIntervalS: number;
  strips: { path: string; film: Film; paths: FilmPathView[] }[];
}

export interface SimulateStackInput {
  plan: RehearsalPlan;
  /** Folder of the stack in whose frames particles are planted; null where all is simulated. */
  sourceDir: string | null;
  stackPath: string;
  truthPath: string;
}
export interface SimulateStackOutput {
  /** Length of the stack. */
  bytes: number;
}

export interface AssessRehearsalInput extends Omit<RehearsalFound, 'spots'> {
  truthPath: string;
  /** Spots of all chunks, in order. */
  chunks: Uint8Array[];
}

export interface Tasks {
  indexStack: { input: Pick<InspectInput, 'source' | 'outDir'>; output: IndexOutput };
  inspectStack: { input: InspectInput; output: StackReport };
  measureImage: { input: MeasureImageInput; output: MeasureImageOutput };
  detectChunk: { input: DetectChunkInput; output: DetectChunkOutput };
  linkTracks: { input: LinkTracksInput; output: LinkTracksOutput };
  measureFlow: { input: MeasureFlowInput; output: FlowMeasures };
  judgeTracks: { input: MeasureFlowInput; output: NamedTracks };
  measureFlowPart: { input: MeasureFlowPartInput; output: FlowPartResults[FlowPart] };
  tryRecipe: { input: TryRecipeInput; output: TryRecipeOutput };
  /** How many were composed. */
  composeStrips: { input: ComposeStripsInput; output: number };
  simulateStack: { input: SimulateStackInput; output: SimulateStackOutput };
  assessRehearsal: { input: AssessRehearsalInput; output: RehearsalAssessment };
  refinePoint: { input: RefinePointInput; output: RefinePointOutput };
}
export type TaskName = keyof Tasks;
export type TaskInput<K extends TaskName> = Tasks[K]['input'];
export type TaskOutput<K extends TaskName> = Tasks[K]['output'];

/** From the pool to a child. */
export type ToChild = { [K in TaskName]: { id: number; task: K; input: TaskInput<K> } }[TaskName];

/** From a child to the pool. */
export type FromChild =
  | { id: number; kind: 'progress'; share: number }
  | { id: number; kind: 'done'; output: TaskOutput<TaskName>; cpuS: number; spent: boolean }
  | { id: number; kind: 'failed'; error: { name: string; message: string; stack?: string; field?: string } };
