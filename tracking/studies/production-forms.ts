import { compareForms } from '../line-density-equation/compare-forms';
import { PRODUCTION_FORMS, type ProductionForm } from '../line-density-equation/production-forms';
import { followTransient } from '../line-density-equation/transient';
import { createRandom, mixSeed } from '../random';

/** Transients of one form, and what was said of them. */
export interface FormTrials {
  form: ProductionForm['name'];
  kind: TransientKind;
  trials: number;
  right: number;
  wrong: number;
  undecided: number;
}

/** Long and clean; or short, few and noisy, from which no form can be told. */
export type TransientKind = 'clean growth' | 'poor growth';

const KINDS: Record<TransientKind, { points: number; noise: number; from: number; to: number }> = {
  'clean growth': { points: 200, noise: 0.02, from: 0.01, to: 0.95 },
  // One decade of growth.
  'poor growth': { points: 40, noise: 0.25, from: 0.05, to: 0.5 },
};
const STEADY_M2 = 1e8;
const TIMES = 4000;

/** Made transients of every form under noise of ln L, each judged by `compareForms`. */
export function productionFormTrials(kind: TransientKind, seeds: readonly number[]): FormTrials[] {
  const { points, noise, from, to } = KINDS[kind];
  return PRODUCTION_FORMS.map(({ name, power }) => {
    const transient = { startM2: from * STEADY_M2, steadyM2: STEADY_M2, ratePerS: 1 };
    const endS = timeUntil(to, transient, power);
    const timeS = Float64Array.from({ length: points }, (_, i) => (i / (points - 1)) * endS);
    const ln = new Float64Array(points);
    followTransient(transient, power, timeS, ln);
    const result: FormTrials = { form: name, kind, trials: seeds.length, right: 0, wrong: 0, undecided: 0 };
    for (const seed of seeds) {
      const random = createRandom(mixSeed(seed, 77));
      const { chosen } = compareForms({
        timeS,
        densityM2: ln.map((v) => Math.exp(v + noise * random.normal())),
      });
      if (chosen === null) result.undecided++;
      else if (chosen === name) result.right++;
      else result.wrong++;
    }
    return result;
  });
}

/** Time at which a share of the steady state is reached, s. */
function timeUntil(share: number, transient: Parameters<typeof followTransient>[0], power: number): number {
  const timeS = Float64Array.from({ length: TIMES }, (_, i) => i * 0.01);
  const ln = new Float64Array(TIMES);
  followTransient(transient, power, timeS, ln);
  return timeS[ln.findIndex((v) => v >= Math.log(share * transient.steadyM2))];
}
