import { createRandom, mixSeed } from '../random';
import { fitSteadyTangle } from '../steady-tangle/fit-steady-tangle';

/** How often intervals held the truth over simulated campaigns. */
export interface SteadyTangleCoverage {
  campaigns: number;
  runs: number;
  gammaCovered: number;
  v0Covered: number;
}

const RUNS = 12;
const GAMMA_SM2 = 1.1e6;
const V0_MS = 2e-3;
const ROOT_DENSITY_ERROR = 0.05;
const VNS_ERROR = 0.03;

/** Campaigns of 12 runs from 5 to 30 mm/s with 5 % error in L^(1/2) and 3 % in v_ns, one per seed. */
export function steadyTangleCoverage(seeds: readonly number[]): SteadyTangleCoverage {
  let gammaCovered = 0;
  let v0Covered = 0;
  for (const seed of seeds) {
    const random = createRandom(mixSeed(seed, 83));
    const truth = Float64Array.from({ length: RUNS }, (_, i) => 5e-3 + (25e-3 * i) / (RUNS - 1));
    const vnsMS = truth.map((v) => v * (1 + VNS_ERROR * random.normal()));
    const rootDensityPerM = truth.map(
      (v) => GAMMA_SM2 * (v - V0_MS) * (1 + ROOT_DENSITY_ERROR * random.normal()),
    );
    const { gammaSM2, v0MS } = fitSteadyTangle({
      vnsMS,
      rootDensityPerM,
      vnsErrorMS: vnsMS.map((v) => VNS_ERROR * v),
      rootDensityErrorPerM: rootDensityPerM.map((r) => ROOT_DENSITY_ERROR * r),
    });
    if (gammaSM2.low <= GAMMA_SM2 && GAMMA_SM2 <= gammaSM2.high) gammaCovered++;
    if (v0MS.low <= V0_MS && V0_MS <= v0MS.high) v0Covered++;
  }
  return { campaigns: seeds.length, runs: RUNS, gammaCovered, v0Covered };
}
