import { describe, expect, it } from 'vitest';
import { countResults } from '@/scripts/platform/count-results.mjs';

const file = (status: string, ...tests: string[]) => ({
  name: 'a.test.ts',
  status,
  assertionResults: tests.map((test) => ({ status: test })),
});

describe('the closing line of the tests', () => {
  it('counts tests, not files', () => {
    const report = { testResults: [file('passed', 'passed', 'passed'), file('failed', 'passed', 'failed')] };
    expect(countResults(report, 1)).toMatchObject({ passed: 3, failed: 1, skipped: 0 });
  });

  it('counts a file that could not be loaded as failed', () => {
    const report = { testResults: [file('passed', 'passed'), file('failed')] };
    expect(countResults(report, 1)).toMatchObject({ passed: 1, failed: 1, unloaded: ['a.test.ts'] });
  });

  it('counts skipped tests as neither', () => {
    const report = { testResults: [file('passed', 'passed', 'skipped', 'todo', 'pending')] };
    expect(countResults(report, 0)).toMatchObject({ passed: 1, failed: 0, skipped: 3 });
  });

  it('is never green when the runner was not', () => {
    expect(countResults({ testResults: [file('passed', 'passed')] }, 1)).toMatchObject({
      passed: 1,
      failed: 1,
    });
    expect(countResults(null, 1)).toMatchObject({ passed: 0, failed: 1 });
  });
});
