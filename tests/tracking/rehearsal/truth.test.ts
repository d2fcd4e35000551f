import { describe, expect, it } from 'vitest';
import { makeTruth, tangleOf, cameraOf } from '@/tracking/rehearsal/make-scene';
import { checkPlan, PlanRangeError, planFieldError, tracersInSight, type RehearsalPlan } from '@/tracking/rehearsal/plan'; // prettier-ignore
import { decodeTruth, encodeTruth } from '@/tracking/rehearsal/truth';
import { KIND_TRAPPED } from '@/tracking/simulate/scene';
import { expectWithin } from '../../helpers/expect-within';
import { REHEARSAL_PLAN } from '../../helpers/rehearsal-plan';

const withScene = (scene: Partial<RehearsalPlan['scene']>): RehearsalPlan => ({
  ...REHEARSAL_PLAN,
  scene: { ...REHEARSAL_PLAN.scene, ...scene },
});

describe('the scene of a plan', () => {
  const truth = makeTruth(REHEARSAL_PLAN);

  it('holds the tracers asked for, on lines and free', () => {
    const { scene } = truth;
    const asked = tracersInSight(REHEARSAL_PLAN.conditions.pixelSize_m, REHEARSAL_PLAN.scene);
    // A Poisson number of tracers, each seen for a good part of the recording; meetings come on top.
    expectWithin(scene.frame.length / scene.frames, asked, { rel: 0.5 });
    const trapped = scene.kind.filter((kind) => kind === KIND_TRAPPED).length;
    expect(trapped).toBeGreaterThan(0);
    expect(trapped).toBeLessThan(scene.tracers);
    expect(scene.events.length).toBeGreaterThan(0);
  });

  it('is the same for the same seed and another for another', () => {
    const bytes = (of: typeof truth) => Buffer.from(encodeTruth(of));
    expect(bytes(makeTruth(REHEARSAL_PLAN)).equals(bytes(truth))).toBe(true);
    expect(bytes(makeTruth({ ...REHEARSAL_PLAN, seed: 12 })).equals(bytes(truth))).toBe(false);
  });

  it('takes the line density that the heat flux leads to expect where none is given', () => {
    const plan = withScene({ lineDensity_m2: null });
    const gamma = { ...plan, conditions: { ...plan.conditions, gamma_s_m2: 1e6, v0_m_s: 0 } };
    const { lineDensityM2 } = tangleOf(gamma, cameraOf(gamma));
    // L = (gamma v_ns)^2 with v_ns = q / (rho_s S T): 9.314 mm/s for 1000 W/m2 at 1.85 K (Donnelly & Barenghi 1998),
    // and linear in q.
    expectWithin(lineDensityM2, (1e6 * 0.3 * 9.314e-3) ** 2, { rel: 0.01 });
  });

  it('survives being written down', () => {
    const back = decodeTruth(encodeTruth(truth));
    expect(back).toEqual({ ...truth, scene: { ...truth.scene } });
    const none = { ...truth, scene: { ...truth.scene, lineDensityM2: Number.NaN } };
    expect(decodeTruth(encodeTruth(none)).scene.lineDensityM2).toBeNaN();
  });

  it('is refused where bytes are missing or foreign', () => {
    const bytes = encodeTruth(truth);
    expect(() => decodeTruth(bytes.subarray(0, bytes.length - 4))).toThrow(/when this truth has/);
    expect(() => decodeTruth(bytes.subarray(0, 10))).toThrow(/more than 10 bytes/);
    const foreign = bytes.slice();
    foreign[0] ^= 1;
    expect(() => decodeTruth(foreign)).toThrow(/when expected/);
  });
});

describe('what a plan can not be', () => {
  it.each([
    [{ frames: 5000, widthPx: 2048, heightPx: 2048 }, 'scene.frames', /million pixels/],
    [{ seeding_m2: 5e9 }, 'scene.seeding_m2', /a tracer on every/],
    [{ seeding_m2: 1e4 }, 'scene.seeding_m2', /no tracer is in sight/],
    [{ snr: 4 }, 'scene.brightness_e', /either/],
  ])('%j', (scene, field, sentence) => {
    const check = () => checkPlan(withScene(scene));
    expect(check).toThrow(sentence);
    try {
      check();
    } catch (error) {
      expect((error as PlanRangeError).field).toBe(field);
    }
  });

  it('names field, range and what was typed', () => {
    expect(planFieldError('scene.frames', 12.5)).toBe('Frames must be a whole number from 8 to 5000 (you typed \'12.5\').'); // prettier-ignore
    expect(planFieldError('scene.snr', Number.NaN)).toMatch(/^SNR must be a number/);
    expect(planFieldError('seed', 3)).toBeNull();
  });

  it('refuses what would take too long to make before making it', () => {
    const plan = withScene({ lineDensity_m2: 1e12 });
    expect(() => tangleOf(plan, cameraOf(plan))).toThrow(/Too many lines/);
    const fast = { ...plan, conditions: { ...plan.conditions, heatFlux_W_m2: 1e6 } };
    expect(() => tangleOf(fast, cameraOf(fast))).toThrow(PlanRangeError);
  });
});
