import type { Conditions } from '../types';
import type { TangleOptions } from '../simulate/tangle-options';

/** Waves whose lines move at about the velocity that the law gives lines of a tangle (factor 2). */
export const STRONG_WAVES = { slope: 0.8, waveM: 5e-4 };

/** A tangle of known line density, and what the methods owe it. */
export interface LineDensityCase {
  name: string;
  lineDensityM2: number;
  scene: Partial<TangleOptions>;
  sizePx?: number;
  /** Conditions of the run other than those of a counterflow at 1.85 K. */
  conditions?: Partial<Conditions>;
  /** The tangle decays freely at the rate of chi_2 from `lineDensityM2` on. */
  decays?: boolean;
  /** Methods whose assumptions hold: their statistical intervals are held to the truth. */
  holds: readonly string[];
  /** Methods that must decline, or whose note must say what is broken. */
  broken?: { methods: readonly string[]; says: RegExp };
}

/** Radius of the tracers of which captures are looked for, from which lines catch them, m. */
const CAPTURE_RADIUS_M = 8e-6;

const BY_COUNTING = ['crossings', 'neighbour-distance', 'beads-per-length'] as const;

export const LINE_DENSITY_CASES: readonly LineDensityCase[] = [
  {
    name: 'lines 0.32 mm apart',
    lineDensityM2: 1e7,
    scene: {},
    holds: ['neighbour-distance', 'beads-per-length', 'line-velocity', 'marked-chains'],
  },
  {
    name: 'lines 0.18 mm apart',
    lineDensityM2: 3e7,
    scene: {},
    sizePx: 384,
    holds: ['beads-per-length', 'line-velocity', 'marked-chains'],
  },
  {
    name: 'lines 0.1 mm apart',
    lineDensityM2: 1e8,
    scene: {},
    sizePx: 256,
    holds: ['beads-per-length', 'line-velocity', 'marked-chains'],
  },
  {
    name: 'thin sheet',
    lineDensityM2: 1e7,
    scene: { sheetThicknessM: 6e-5, beadsPerMetre: 15_000 },
    holds: ['crossings', 'neighbour-distance', 'beads-per-length', 'line-velocity'],
  },
  {
    name: 'curved lines',
    lineDensityM2: 1e7,
    scene: { curved: STRONG_WAVES },
    holds: ['line-velocity'],
    broken: { methods: BY_COUNTING, says: /lines bend/ },
  },
  {
    name: 'captures',
    lineDensityM2: 2e7,
    scene: { beadsPerMetre: 4000, freeTracersPerFrame: 110, captureRadiusM: CAPTURE_RADIUS_M },
    sizePx: 288,
    conditions: { tracer: { diameter_m: 2 * CAPTURE_RADIUS_M } },
    holds: ['free-path'],
  },
  {
    name: 'free decay',
    lineDensityM2: 1.5e8,
    scene: { freeTracersPerFrame: 0, vnMPerS: 0, tangleVelocityMPerS: 0 },
    sizePx: 192,
    conditions: { heatFlux_W_m2: 0 },
    decays: true,
    holds: ['decay'],
  },
  {
    name: 'thick sheet',
    lineDensityM2: 1e7,
    scene: { sheetThicknessM: 4e-4 },
    holds: [],
    broken: { methods: ['crossings', 'neighbour-distance'], says: /thick/ },
  },
  {
    name: 'few decorated lines',
    lineDensityM2: 1e7,
    scene: { beadsPerMetre: 400 },
    holds: [],
    broken: { methods: BY_COUNTING, says: /Few lines are decorated/ },
  },
  {
    name: 'lines across the flow',
    lineDensityM2: 1e7,
    scene: { acrossFlow: true },
    holds: [],
    broken: { methods: [...BY_COUNTING, 'combined'], says: /across the flow by preference/ },
  },
  {
    name: 'one population',
    lineDensityM2: 1e7,
    scene: { freeTracersPerFrame: 160, beadsPerMetre: 0 },
    holds: [],
    broken: { methods: [...BY_COUNTING, 'visible-length', 'line-velocity'], says: /named trapped/ },
  },
];

/** The case of a name. */
export function lineDensityCase(name: string): LineDensityCase {
  const found = LINE_DENSITY_CASES.find((one) => one.name === name);
  if (!found) throw new RangeError(`There is no case '${name}'.`);
  return found;
}
