import type { Random } from '../random';

/** Chance that a dark tracer stays dark for another frame. */
const STAYS_DARK = 0.3;

/** Turns 1 (seen) into 2 (in the sheet but dark) where a tracer blinks. */
export function blink(random: Random, visible: Uint8Array, perFrame: number): void {
  let dark = false;
  for (let k = 0; k < visible.length; k++) {
    dark = random.uniform() < (dark ? STAYS_DARK : perFrame);
    if (dark && visible[k] === 1) visible[k] = 2;
  }
}

/** Photoelectrons of one tracer: log-normal between tracers, with the given mean. */
export function tracerBrightness(random: Random, meanE: number, spread: number): number {
  return meanE * Math.exp(spread * random.normal() - 0.5 * spread * spread);
}
