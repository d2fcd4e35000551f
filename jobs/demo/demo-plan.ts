import { deriveRun } from '@/tracking/flow/derive-run';
import type { RunConditions } from '@/tracking/flow/run-conditions';
import type { Conditions } from '@/tracking/types';
import type { DemoScene } from './make-demo-stack';

// The conditions are invented; what follows from them (velocities, expected line spacing) comes from
// the same formulas as everywhere else, so that the recordings fit the runs they belong to.

export interface DemoRecording {
  /** Stays the same for ever: by it a later start knows what is there. */
  key: string;
  name: string;
  scene: DemoScene;
}

export interface DemoRun {
  name: string;
  tags: string[];
  notes: string;
  startedAt: string | null;
  conditions: RunConditions;
  recordings: DemoRecording[];
}

export interface DemoCampaign {
  name: string;
  description: string;
  tags: string[];
  runs: DemoRun[];
}

const SIZE = { widthPx: 256, heightPx: 256 };
const DEUTERIUM = { species: 'solid deuterium', diameter_m: 4e-6, density_kg_m3: 202 };
const IMAGING = { pixelSize_m: 8e-6, frameInterval_s: 4e-3, exposure_s: 5e-4, sheetThickness_m: 1e-4 };
const CHANNEL = { shape: 'rectangular' as const, width_m: 0.016, depth_m: 0.016, length_m: 0.32 };

function counterflow(temperature_K: number, heatFlux_W_m2: number): RunConditions {
  return {
    ...IMAGING,
    temperature_K,
    heatFlux_W_m2,
    drive: 'counterflow',
    flowDirection: [1, 0],
    gravityDirection: [0, 1],
    tracer: DEUTERIUM,
    channel: CHANNEL,
  };
}

/** The scene that the run's own conditions lead to expect. */
function steadyScene(
  conditions: RunConditions,
  rest: Pick<DemoScene, 'frames' | 'seed' | 'events'>,
): DemoScene {
  const { vn_m_s, vs_m_s, expectedSpacing_m } = deriveRun(conditions).values;
  if (vn_m_s === null || vs_m_s === null || expectedSpacing_m === null) {
    throw new RangeError(
      'A demonstration of counterflow needs conditions from which velocities and spacing follow.',
    );
  }
  return {
    ...SIZE,
    lineDensityM2: 1 / expectedSpacing_m ** 2,
    trappedInSight: 70,
    freeInSight: 45,
    vnMPerS: vn_m_s,
    tangleMPerS: vs_m_s,
    brightnessE: 520,
    ...rest,
  };
}

function counterflowRun(
  run: Pick<DemoRun, 'name' | 'notes' | 'startedAt'>,
  conditions: RunConditions,
  recording: Pick<DemoRecording, 'key' | 'name'> & Pick<DemoScene, 'frames' | 'seed' | 'events'>,
): DemoRun {
  const { key, name, ...scene } = recording;
  return {
    ...run,
    tags: ['counterflow'],
    conditions,
    recordings: [{ key, name, scene: steadyScene(conditions, scene) }],
  };
}

const GRID: RunConditions = {
  ...IMAGING,
  temperature_K: 1.5,
  drive: 'towed-grid',
  gravityDirection: [0, 1],
  tracer: DEUTERIUM,
  channel: { shape: 'rectangular', width_m: 0.02, depth_m: 0.02, length_m: 0.2 },
};

const gridScene = (lineDensityM2: number, seed: number): DemoScene => ({
  ...SIZE,
  frames: 80,
  lineDensityM2,
  trappedInSight: 80,
  freeInSight: 12,
  vnMPerS: 3e-4,
  tangleMPerS: 3e-4,
  events: 3,
  brightnessE: 480,
  seed,
});

/** Campaigns, runs and recordings of the demonstration, in the order in which they were made. */
export const DEMO_CAMPAIGNS: readonly DemoCampaign[] = [
  {
    name: 'Counterflow in the square channel',
    description: 'Line spacing against heat flux at two temperatures. Simulated recordings of invented runs.',
    tags: ['counterflow', 'simulated'],
    runs: [
      counterflowRun(
        { name: 'Run 1, gentle heat', notes: 'First run after cooling down; tracers seeded twice.', startedAt: '2026-02-03T09:40:00Z' }, // prettier-ignore
        counterflow(1.65, 200),
        { key: 'counterflow-165-200', name: 'q200-sheet-a.tif', frames: 100, seed: 1101, events: 2 },
      ),
      counterflowRun(
        { name: 'Run 2, twice the heat', notes: '', startedAt: '2026-02-03T11:05:00Z' },
        counterflow(1.65, 400),
        { key: 'counterflow-165-400', name: 'q400-sheet-a.tif', frames: 100, seed: 1102, events: 4 },
      ),
      counterflowRun(
        { name: 'Run 3, warmer bath', notes: '', startedAt: '2026-02-04T10:20:00Z' },
        counterflow(1.85, 300),
        { key: 'counterflow-185-300', name: 'q300-sheet-a.tif', frames: 100, seed: 1103, events: 6 },
      ),
      counterflowRun(
        { name: 'Run 4, warmer and driven hard', notes: 'Sheet as thick as the spacing: compare the estimates with care.', startedAt: '2026-02-04T13:15:00Z' }, // prettier-ignore
        counterflow(1.85, 600),
        { key: 'counterflow-185-600', name: 'q600-sheet-a.tif', frames: 90, seed: 1104, events: 4 },
      ),
    ],
  },
  {
    name: 'Decay behind a towed grid',
    description: 'The tangle left behind by a grid, seen soon after the tow and later. No heat flux.',
    tags: ['grid', 'decay', 'simulated'],
    runs: [
      {
        name: 'Tow 1, two looks',
        tags: ['grid'],
        notes: 'Two recordings of the same tow: 2 s and 8 s after the grid has passed.',
        startedAt: '2026-02-17T14:30:00Z',
        conditions: GRID,
        recordings: [
          { key: 'grid-early', name: 'tow-1-after-2s.tif', scene: gridScene(3e7, 1201) },
          { key: 'grid-late', name: 'tow-1-after-8s.tif', scene: gridScene(8e6, 1202) },
        ],
      },
      {
        name: 'Tow 2, not recorded',
        tags: ['grid'],
        notes: 'The camera did not trigger; only the conditions were noted.',
        startedAt: '2026-02-17T15:10:00Z',
        conditions: GRID,
        recordings: [],
      },
    ],
  },
  {
    name: 'Plans for the next cooldown',
    description: 'Runs that have not been taken yet: what their conditions would lead to.',
    tags: ['plan'],
    runs: [
      {
        name: 'Strong counterflow, as first planned',
        tags: ['plan'],
        notes: 'Too fast for this frame interval: see the warnings.',
        startedAt: null,
        conditions: {
          pixelSize_m: 1e-5,
          frameInterval_s: 0.02,
          exposure_s: 0.015,
          sheetThickness_m: 1e-4,
          temperature_K: 2,
          heatFlux_W_m2: 3000,
          drive: 'counterflow',
          flowDirection: [0, -1],
          gravityDirection: [0, 1],
          tracersPerArea_m2: 5e7,
          tracer: { species: 'hollow glass', diameter_m: 1e-5, density_kg_m3: 600 },
          channel: { shape: 'circular', width_m: 0.01, length_m: 0.2 },
        },
        recordings: [],
      },
    ],
  },
];

/** The conditions of a run in the shape that a simulation takes. */
export function conditionsForScene(run: RunConditions): Conditions {
  const { pixelSize_m, frameInterval_s } = run;
  if (!pixelSize_m || !frameInterval_s)
    throw new RangeError('A recording needs pixel size and frame interval.');
  return { ...run, pixelSize_m, frameInterval_s };
}
