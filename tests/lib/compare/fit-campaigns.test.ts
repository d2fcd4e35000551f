import { describe, expect, test } from 'vitest';
import { comparedPoints, lawLine } from '@/components/compare/compared-points';
import { sortedRuns } from '@/components/compare/run-columns';
import { fitCampaigns, rootDensity, whyLeftOut } from '@/lib/compare/fit-campaigns';
import { compareQuery } from '@/lib/schemas/compare';
import type { ComparedRun } from '@/lib/views/compare-view';
import { expectWithin } from '@/tests/helpers/expect-within';

const CAMPAIGN = '01a23258-11f1-74c8-8cc1-8fc5b3d8ab60';
const GAMMA = 1.2e6;
const V0 = 1.5e-3;

function run(vns: number | null, fields: Partial<ComparedRun> = {}): ComparedRun {
  const value = vns === null ? 1e8 : (GAMMA * (vns - V0)) ** 2;
  const made = {
    campaignId: CAMPAIGN,
    campaignName: 'C',
    runId: `${vns}`,
    runName: `run ${vns}`,
    analysisId: CAMPAIGN,
    drive: 'counterflow',
    temperature_K: 1.75,
    heatFlux_W_m2: 300,
    vn_m_s: null,
    vs_m_s: null,
    startedAt: null,
    tags: [],
    pressure_Pa: null,
    lineDensities_m2: [],
    events: null,
    tailExponent: null,
    agreement: null,
    signedOff: null,
    exclusion: null,
    vns_m_s: vns === null ? null : { value: vns, error: 0.03 * vns },
    lineDensity_m2: { value, low: value / 1.2, high: value * 1.2 },
    trappedShare: null,
    tracks: 10,
    acceptedCandidates: 1,
    ...fields,
  };
  return { ...made, leftOut: whyLeftOut(made) };
}

describe('the law fitted to a campaign', () => {
  test('gives back gamma and v_0 that made the runs, beside the published value at their temperature', () => {
    const [fit] = fitCampaigns([4e-3, 8e-3, 12e-3, 20e-3].map((vns) => run(vns)));
    expect(fit.runs).toBe(4);
    expectWithin(fit.gamma_s_m2?.value ?? 0, GAMMA, { rel: 1e-6 });
    expectWithin(fit.v0_m_s?.value ?? 0, V0, { rel: 1e-6 });
    // Halfway between 109.6 and 140.1 s/cm^2 at 1.6 and 1.9 K (Adachi et al. 2010, as kept in the table).
    expectWithin(fit.publishedGamma_s_m2 ?? 0, 124.85e4, { rel: 1e-6 });
    expect(fit.note).toBeNull();
  });

  test('needs three runs, and runs that differ', () => {
    expect(fitCampaigns([run(4e-3), run(8e-3)])[0]).toMatchObject({
      gamma_s_m2: null,
      note: expect.stringMatching(/at least 3/),
    });
    expect(fitCampaigns([run(4e-3), run(4e-3), run(4e-3)])[0].note).toMatch(/same counterflow velocity/);
  });

  test('says where temperatures differ', () => {
    const runs = [run(4e-3), run(8e-3, { temperature_K: 1.95 }), run(12e-3)];
    expect(fitCampaigns(runs)[0].note).toMatch(/between 1.75 and 1.95 K/);
  });

  test('leaves out runs without a value, and says why', () => {
    const none = [
      run(5e-3, { lineDensity_m2: null }),
      run(null),
      run(6e-3, { analysisId: null }),
      run(7e-3, { lineDensity_m2: { value: 1e8, low: null, high: null } }),
      run(0, { vns_m_s: { value: 0, error: 0 } }),
      run(9e-3, { exclusion: { reason: 'The heater was off.', by: 'A', at: '2026-01-01T00:00:00Z' } }),
    ];
    for (const { leftOut } of none) expect(leftOut).toMatch(/\.$/);
    expect(new Set(none.map(({ leftOut }) => leftOut)).size).toBe(6);
    const [fit] = fitCampaigns([...none, run(4e-3), run(8e-3), run(12e-3)]);
    expect(fit.runs).toBe(3);
  });

  test('takes half the error of ln L for that of the root', () => {
    // 95 % interval of a factor e^(+-1.96 s): s of ln L is 0.1, of L^(1/2) 5 %.
    const spread = Math.exp(0.196);
    const { root, error } = rootDensity({ value: 1e8, low: 1e8 / spread, high: 1e8 * spread });
    expect(root).toBe(1e4);
    expectWithin(error, 500, { rel: 1e-3 });
  });
});

describe('the plot', () => {
  test('draws points in 1/mm and the law through them', () => {
    const runs = [4e-3, 8e-3, 12e-3].map((vns) => run(vns));
    const points = comparedPoints(runs, 'vns');
    const [start, end] = lawLine(fitCampaigns(runs)[0], 12);
    expectWithin(points[2].x, 12, { abs: 1e-9 });
    expectWithin(points[2].y, end.y, { rel: 1e-6 });
    expectWithin(start.x, 1.5, { rel: 1e-6 });
    expectWithin(start.y, 0, { abs: 1e-9 });
    expect(comparedPoints([run(null)], 'vns')).toEqual([]);
    expect(comparedPoints([run(null)], 'temperature')[0]).toMatchObject({ x: 1.75, faint: true });
    expectWithin(comparedPoints([run(null)], 'heat-flux')[0].x, 30, { rel: 1e-12 });
  });
});

describe('the table', () => {
  test('is ordered by any column, unknown values last either way', () => {
    const runs = [run(8e-3), run(null), run(4e-3)];
    expect(sortedRuns(runs, 'vns').map(({ runName }) => runName)).toEqual([
      'run 0.004',
      'run 0.008',
      'run null',
    ]);
    expect(sortedRuns(runs, '-vns').map(({ runName }) => runName)).toEqual([
      'run 0.008',
      'run 0.004',
      'run null',
    ]);
  });
});

describe('what may be asked', () => {
  test.each([
    [{ campaigns: 'x' }, /ids with commas/],
    [{ temperatureFrom_K: 'warm' }, /number from 0 to 10 K/],
    [{ vnsFrom_m_s: '0.02', vnsTo_m_s: '0.01' }, /must not be above/],
    [{ drives: 'rocket' }, /drives must be of/],
    [{ signedOff: 'maybe' }, /yes or no/],
    [{ temperatureFrom_K: '2', temperatureTo_K: '1.5' }, /must not be above/],
    [{ method: 'guess' }, /must be one of/],
  ])('%j is refused in a sentence', (query, sentence) => {
    const result = compareQuery.safeParse(query);
    expect(result.success).toBe(false);
    expect(result.error?.issues[0].message).toMatch(sentence);
  });

  test('nothing means everything', () => {
    expect(compareQuery.parse({})).toEqual({ method: 'combined' });
    expect(compareQuery.parse({ campaigns: `${CAMPAIGN},`, temperatureTo_K: '1.9' })).toEqual({
      campaigns: [CAMPAIGN],
      temperatureTo_K: 1.9,
      method: 'combined',
    });
  });
});
