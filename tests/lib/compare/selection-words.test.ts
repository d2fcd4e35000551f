import { describe, expect, it } from 'vitest';
import { selectionWords, shownBound, typedBound } from '@/lib/compare/selection-words';
import { reportCautions } from '@/lib/report/cautions';
import type { ComparedRun } from '@/lib/views/compare-view';

describe('a selection in words', () => {
  it.each([
    [{}, 'everything'],
    [{ temperatureFrom_K: '1.6', temperatureTo_K: '1.9' }, '1.6 to 1.9 K'],
    [{ heatFluxFrom_W_m2: '300', vnsTo_m_s: '0.0125' }, 'q from 30 mW/cm^2, v_ns up to 12.5 mm/s'],
    [
      { campaigns: 'a,b', drives: 'counterflow,none', tags: 'clean', signedOff: 'no' },
      '2 campaigns, counterflow or no drive, tagged clean, not signed off',
    ],
  ])('%j', (filters, words) => {
    expect(selectionWords(filters)).toBe(words);
  });

  it('numbers come back from the address as they were typed', () => {
    for (const typed of ['30', '12.5', '0.1', '7.3']) {
      for (const siPerUnit of [1, 10, 1e-3]) {
        expect(shownBound(typedBound(typed, siPerUnit), siPerUnit)).toBe(typed);
      }
    }
    expect(typedBound('1,85', 1)).toBe('1.85');
    // What is no number goes on to the server, which says so.
    expect(typedBound('warm', 10)).toBe('warm');
    expect(typedBound('  ', 10)).toBe('');
  });
});

describe('cautions of a report', () => {
  const run = (fields: Partial<ComparedRun>) => ({ runName: 'R', analysisId: 'a', exclusion: null, events: null, ...fields }) as ComparedRun; // prettier-ignore
  const words = (...args: Parameters<typeof reportCautions>) =>
    reportCautions(...args).map((one) => one.words);

  it('tell what people left out, what is not judged, what is old, why there is no combined value', () => {
    const exclusion = { reason: 'The heater was off.', by: 'Mira', at: '2026-01-01T00:00:00Z' };
    const events = { confirmed: 1, judged: 2, candidates: 5, perVolumeTime_m3_s: null };
    expect(words({ runs: [run({ exclusion, events })] }, [], [])).toEqual([
      'Left out of fits by Mira: The heater was off.',
      '3 of 5 reconnection candidates are not judged yet, so the rate of events may rise.',
    ]);
    const estimates = [{ method: 'combined', value: null, note: 'The methods disagree.' }];
    expect(words({ runs: [] }, [{ name: 'R', warnings: ['Too warm.'] }], [{ runName: 'R', stale: true, estimates }])).toEqual([
      'Its results are older than the corrections of its tracks.',
      'The methods disagree.',
      'Too warm.',
    ]); // prettier-ignore
    expect(words({ runs: [run({})] }, [], [])).toEqual([]);
  });
});
