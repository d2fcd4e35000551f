import { expect, test } from 'vitest';
import { studyLinkingDifficulty } from '@/tracking/studies/linking-difficulty';

test('wrong links stay below those of nearest choice, and linking is comfortable below a difficulty of 0.3', () => {
  const rows = studyLinkingDifficulty({ seed: 7, scattersPx: [0.1, 0.5, 1, 2, 3, 4] });
  for (const { difficulty, links, wrongLinkShare, nearestChoiceShare, alpha } of rows) {
    expect(links).toBeGreaterThan(5000);
    // Nearest choice among tracers at random errs with 2 pi n s^2 / (1 + 2 pi n s^2); wrong links come in
    // pairs, hence the 2 in three standard deviations of a count.
    const chance = 3 * Math.sqrt((2 * nearestChoiceShare) / links);
    expect(wrongLinkShare).toBeLessThan(nearestChoiceShare + chance);
    // Steps of less than 0.3 spacings are the comfortable ones (Malik, Dracos & Papantoniou 1993); the
    // value of alpha that this should mean is common practice, no source.
    if (difficulty < 0.3) expect(alpha).toBeGreaterThan(0.9);
  }
  expect(rows[0].difficulty).toBeLessThan(0.05);
  expect(rows[0].wrongLinkShare).toBeLessThan(1e-3);
  expect(rows[5].difficulty).toBeGreaterThan(0.5);
  for (let i = 1; i < rows.length; i++) {
    expect(rows[i].difficulty).toBeGreaterThan(rows[i - 1].difficulty);
    expect(rows[i].alpha).toBeLessThanOrEqual(rows[i - 1].alpha);
  }
});
