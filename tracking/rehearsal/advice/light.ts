import type { Advice } from '../assessment';
import type { AdviceFacts } from './facts';
import { about, percent } from './words';

/** Classes found less often than this are lost to the analysis in good part. */
const FOUND_LEAST = 0.8;
const FOUND_WANTED = 0.95;

/** Whether faint tracers are lost, and how much light they lack. */
export function lightAdvice({ assessed }: Pick<AdviceFacts, 'assessed'>): Advice[] {
  const { classes } = assessed.detection;
  const faint = classes.filter(({ found }) => found.high < FOUND_LEAST);
  const bright = classes.find(({ found }) => found.value >= FOUND_WANTED);
  if (faint.length === 0) return [];
  const points = faint.reduce((sum, { truePoints }) => sum + truePoints, 0);
  const found = faint.reduce((sum, { truePoints, found: { value } }) => sum + truePoints * value, 0) / points;
  const all = classes.reduce((sum, { truePoints }) => sum + truePoints, 0);
  const brightest = faint[faint.length - 1];
  const lost = `Of tracers below ${about(brightest.highE)} electrons (SNR ${about(brightest.snr)}; ${percent(points / all)} of all) only ${percent(found)} are found in a frame`;
  const need = bright
    ? `they lack light by a factor of ${about(bright.meanE / faint[0].meanE)} at most: more light, a longer exposure or larger tracers`
    : 'no class is found reliably: more light, a longer exposure or larger tracers are needed';
  return [{ about: 'light', weight: 'change', sentence: `${lost}; ${need}.` }];
}
